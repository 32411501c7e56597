/** What expressions read while a note is measured: solutions by run, part data, and figures that stand above. */
import { ZERO_CELSIUS } from '../../solver/circuit.ts';
import { readQuantity } from '../../solver/quantities.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import { type Evaluation, evaluateExpression, type Scope } from '../expressions/evaluate.ts';
import type { CheckedExpression, QuantityReference } from '../expressions/expression.ts';
import type { Figure, Note } from '../language/model.ts';
import type { Measured } from '../results.ts';
import type { AnalysisState } from '../solve-analysis.ts';

/**
 * Fine and coarse solutions differ by about the coarse one's error, usually many times the fine one's; but where something else than the tolerance
 * bounds the steps, both err alike. Twice the difference bounds the error of the references (test/references) in more than 95 of 100 figures.
 */
const ERROR_FRACTION = 2;

/** What rounding leaves of a figure, relative to it: currents that are derivatives of charges are known no better. */
const ROUNDING = 3e-11;

export type Fidelity = 'fine' | 'coarse';

export interface NoteScope {
  readonly evaluate: (expression: CheckedExpression, run: number, fidelity: Fidelity) => Evaluation | 'pending';
  /** Number of runs that the expression has a value for. */
  readonly runsOf: (expression: CheckedExpression) => number;
  /** Names of the analyses that it draws on, those of the figures it names included. */
  readonly analysesOf: (expression: CheckedExpression) => readonly string[];
  /** What holds for it, in words. */
  readonly conditionsOf: (expression: CheckedExpression) => readonly string[];
  /** Drops what was read from solutions that have been replaced. */
  readonly forget: () => void;
}

export function createNoteScope(
  note: Note,
  states: ReadonlyMap<string, AnalysisState>,
  foreignFigure: (note: string, figure: string) => number | undefined,
): NoteScope {
  const figures = new Map<string, Figure>();
  for (const block of note.blocks) {
    if (block.kind === 'figures') for (const figure of block.figures) figures.set(figure.name, figure);
  }
  const quantities = new Map<string, number | Waveform>();
  const evaluated = new Map<string, Evaluation | 'pending'>();

  const read = (analysis: string, quantity: QuantityReference, run: number, fidelity: Fidelity): number | Waveform => {
    const state = states.get(analysis)!;
    const index = state.runs.length === 1 ? 0 : run;
    const key = `${analysis}|${index}|${fidelity}|${JSON.stringify(quantity)}`;
    let value = quantities.get(key);
    if (value === undefined) {
      const { solution, coarse } = state.runs[index]!;
      const waveform = readQuantity(fidelity === 'fine' ? solution : coarse, quantity);
      value = state.block.request.find === 'operating point' ? waveform.values[3]! : waveform;
      quantities.set(key, value);
    }
    return value;
  };
  /** A component's datum; its value is the varied one where an analysis that the expression draws on varies it. */
  const constant = (
    circuit: string,
    designator: string,
    path: string,
    run: number,
    used: readonly string[],
  ): number => {
    if (path === 'value') {
      for (const name of used) {
        const state = states.get(name);
        if (state?.block.circuit !== circuit) continue;
        const { conditions } = state.runs[state.runs.length === 1 ? 0 : run]!;
        const varied = conditions.find((condition) => condition.name === designator);
        if (varied) return varied.value;
      }
    }
    for (const block of note.blocks) {
      if (block.kind !== 'circuit' || block.name !== circuit) continue;
      const datum = block.components.find((component) => component.designator === designator)?.data?.[path];
      if (datum) return datum.value;
    }
    throw new Error(`Internal error: no datum ${designator}.${path} in circuit '${circuit}'`);
  };

  const analysesOf = (expression: CheckedExpression): readonly string[] => {
    const names = new Set<string>(expression.uses.analyses);
    for (const name of expression.uses.figures) {
      const figure = figures.get(name);
      if (figure && figure.expression !== expression)
        for (const inner of analysesOf(figure.expression)) names.add(inner);
    }
    return [...names];
  };
  const runsOf = (expression: CheckedExpression): number =>
    Math.max(1, ...analysesOf(expression).map((name) => states.get(name)?.runs.length ?? 1));

  const evaluate = (expression: CheckedExpression, run: number, fidelity: Fidelity): Evaluation | 'pending' => {
    const used = analysesOf(expression);
    if (used.some((name) => !states.has(name))) return 'pending';
    const scope: Scope = {
      read: (analysis, quantity) => read(analysis, quantity, run, fidelity),
      constant: (circuit, designator, path) => constant(circuit, designator, path, run, used),
      figure: (name, other) => {
        if (other !== undefined) return foreignFigure(other, name);
        const figure = figures.get(name);
        if (!figure) return undefined;
        const key = `${name}|${run}|${fidelity}`;
        let outcome = evaluated.get(key);
        if (outcome === undefined) {
          outcome = evaluate(figure.expression, run, fidelity);
          evaluated.set(key, outcome);
        }
        return outcome !== 'pending' && outcome.ok && typeof outcome.value === 'number' ? outcome.value : undefined;
      },
    };
    return evaluateExpression(expression, scope);
  };

  const conditionsOf = (expression: CheckedExpression): readonly string[] => {
    const words: string[] = [];
    for (const name of analysesOf(expression)) {
      const state = states.get(name);
      if (!state) continue;
      const { block } = state;
      words.push(name === block.request.find ? name : `${name}: ${block.request.find}`);
      if (block.temperatures.length > 0) {
        words.push(
          `T = ${block.temperatures.map((kelvin) => Number((kelvin - ZERO_CELSIUS).toFixed(6))).join(', ')} °C`,
        );
      }
      for (const { designator, values } of block.vary) {
        words.push(`${designator} = ${values.map(({ text }) => text).join(', ')}`);
      }
    }
    return words;
  };

  return {
    evaluate,
    runsOf,
    analysesOf,
    conditionsOf,
    forget: () => {
      quantities.clear();
      evaluated.clear();
    },
  };
}

export type OverRuns =
  | { readonly runs: readonly Measured[] }
  /** There is no value, and why. */
  | { readonly reason: string }
  /** An analysis that it needs has no solution; that has been reported already. */
  | { readonly pending: true };

/** A number with its uncertainty for every run: the difference between two accuracies tells how far it can be trusted. */
export function measureOverRuns(expression: CheckedExpression, scope: NoteScope): OverRuns {
  const lengths = new Set<number>();
  const runs: Measured[] = [];
  const count = scope.runsOf(expression);
  lengths.add(count);
  for (let run = 0; run < count; run++) {
    const fine = scope.evaluate(expression, run, 'fine');
    const coarse = scope.evaluate(expression, run, 'coarse');
    if (fine === 'pending' || coarse === 'pending') return { pending: true };
    if (!fine.ok) return { reason: fine.reason };
    const value = typeof fine.value === 'boolean' ? Number(fine.value) : fine.value;
    if (typeof value !== 'number') return { reason: 'it is not a single number' };
    // where the coarse solution does not even have the figure, all of it is uncertain
    const other = coarse.ok ? Number(coarse.value) : 0;
    runs.push({ value, uncertainty: ERROR_FRACTION * Math.abs(value - other) + ROUNDING * Math.abs(value) });
  }
  return { runs };
}
