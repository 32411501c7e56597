/** A solved note: plain data, the product of the scheduling stage and the input of the rendering stage. */
import type { Solution } from '../solver/analysis.ts';
import type { Waveform } from '../solver/waveform/waveform.ts';
import type {
  AnalysisBlock,
  CircuitBlock,
  Figure,
  FiguresBlock,
  InlineValue,
  Note,
  PlotBlock,
} from './language/model.ts';
import type { Problem } from './problems.ts';

export interface SolvedNote {
  readonly note: Note;
  /** Everything that is wrong: the language stage's problems and those found while solving and measuring. */
  readonly problems: readonly Problem[];
  readonly circuits: readonly CircuitBlock[];
  readonly analyses: readonly SolvedAnalysis[];
  readonly figureTables: readonly FigureTable[];
  readonly plots: readonly SolvedPlot[];
  readonly inlineValues: readonly SolvedInlineValue[];
}

export interface SolvedAnalysis {
  readonly block: AnalysisBlock;
  /** One for each combination of temperature and varied values; the first is the nominal one. */
  readonly runs: readonly Run[];
}

export interface Run {
  /** What was set for this run, e.g. `C1 = 470 nF`; empty where nothing was varied. */
  readonly conditions: readonly { readonly name: string; readonly text: string; readonly value: number }[];
  readonly solution: Solution;
  /** The same solved less accurately: a figure's numerical uncertainty is drawn from the difference. */
  readonly coarse: Solution;
}

/** One number with its numerical uncertainty (absolute, SI). */
export interface Measured {
  readonly value: number;
  readonly uncertainty: number;
}

export type Verdict = 'kept' | 'broken' | 'too close to call';

export interface FigureResult {
  readonly figure: Figure;
  readonly analysis?: string;
  /** Nominal value; missing where the figure could not be computed (its problem is in the note's list). */
  readonly nominal?: Measured;
  /** Least and greatest over the family, where there is one. */
  readonly minimum?: Measured;
  readonly maximum?: Measured;
  /** Limits in SI, where the figure has them. */
  readonly lowerLimit?: number;
  readonly upperLimit?: number;
  readonly verdict?: Verdict;
  /** What holds for this figure, in words: the analysis, temperature, what varied. */
  readonly conditions: readonly string[];
}

export interface FigureTable {
  readonly block: FiguresBlock;
  readonly results: readonly FigureResult[];
}

/** One curve of a plot; waveforms of one run share their grid. */
export interface Curve {
  readonly label: string;
  /** Unit shown on its axis. */
  readonly unit: string;
  /** SI value times `scale` is the number in that unit. */
  readonly scale: number;
  readonly side: 'left' | 'right';
  readonly conditions: readonly { readonly name: string; readonly text: string; readonly value: number }[];
  readonly waveform: Waveform;
  /** Horizontal values in place of the grid (`against:`); on the same grid as `waveform`. */
  readonly against?: Waveform;
}

export interface SolvedPlot {
  readonly block: PlotBlock;
  readonly horizontal: { readonly label: string; readonly unit: string; readonly scale: number };
  readonly curves: readonly Curve[];
  /** Stretches of the horizontal axis (SI) where a mark's condition holds. */
  readonly spans: readonly { readonly label: string; readonly from: number; readonly to: number }[];
}

export interface SolvedInlineValue {
  readonly inline: InlineValue;
  readonly measured?: Measured;
}
