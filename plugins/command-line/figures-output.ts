/** A solved note's figures as a table for people and as JSON for programs. */
import type { Audit } from '../../solver/analysis.ts';
import { SOLVER_VERSION } from '../../solver/solve.ts';
import { siUnitText } from '../language/dimensions.ts';
import type { Problem } from '../problems.ts';
import { quantityText, unitFor } from '../render/number-text.ts';
import type { FigureResult, Measured, SolvedAnalysis, SolvedNote, Verdict } from '../results.ts';

/** All numbers in SI units without prefixes; null where there is none. */
export interface FiguresAsJson {
  /** The note's file. */
  readonly note: string;
  /** No problem, and all limits kept. */
  readonly ok: boolean;
  readonly figures: { readonly [name: string]: FigureAsJson };
  readonly problems: readonly ProblemAsJson[];
  readonly solver: { readonly version: string; readonly analyses: { readonly [name: string]: AnalysisAsJson } };
}

export interface FigureAsJson {
  readonly value: number | null;
  /** Empty for a plain number. */
  readonly unit: string;
  /** Numerical uncertainty of the value, in its unit. */
  readonly uncertainty: number | null;
  readonly min: number | null;
  readonly max: number | null;
  readonly mean: number | null;
  readonly sd: number | null;
  readonly verdict: Verdict | null;
}

export interface ProblemAsJson {
  readonly file: string;
  /** 1-based. */
  readonly line: number;
  readonly column: number;
  readonly message: string;
  /** What is expected instead; empty where the message says it. */
  readonly hint: string;
}

export interface AnalysisAsJson {
  readonly find: string;
  /** Relative, that the figures are asked to meet. */
  readonly accuracy: number;
  /** Effort, summed over what was varied. */
  readonly steps: number;
  readonly newtonIterations: number;
  readonly events: number;
  /** The worst of all runs. */
  readonly audit: { readonly kirchhoff: number | null; readonly tellegen: number | null };
  readonly remarks: readonly string[];
}

/** Exit status: 2 a problem in the input or no solution, 1 a limit that is not surely kept, 0 neither. */
export function outcomeOf(solved: SolvedNote): 0 | 1 | 2 {
  if (solved.problems.some(({ severity }) => severity === 'error')) return 2;
  return resultsOf(solved).some(({ verdict }) => verdict !== undefined && verdict !== 'kept') ? 1 : 0;
}

export function figuresAsJson(solved: SolvedNote): FiguresAsJson {
  const figures = resultsOf(solved).map((result) => [result.figure.name, figureAsJson(result)]);
  const analyses = solved.analyses.map((analysis) => [analysis.block.name, analysisAsJson(analysis)]);
  return {
    note: solved.note.file,
    ok: outcomeOf(solved) === 0,
    figures: Object.fromEntries(figures),
    problems: solved.problems.map(problemAsJson),
    solver: { version: SOLVER_VERSION, analyses: Object.fromEntries(analyses) },
  };
}

/** A line for each figure: name, value, range over what was varied, limit, verdict. */
export function figuresAsText(solved: SolvedNote): string {
  const rows = resultsOf(solved).map(({ figure, nominal, minimum, maximum, verdict }) => {
    const magnitude = Math.max(...[nominal, minimum, maximum].map((measured) => Math.abs(measured?.value ?? 0)));
    const unit = unitFor(figure.unit, figure.expression.dimension, magnitude);
    const show = (measured: Measured | undefined): string =>
      measured ? quantityText(measured, unit, figure.digits) : '–';
    const range = minimum && maximum ? `${show(minimum)} … ${show(maximum)}` : '';
    const limit = figure.must ? `must be ${figure.must.text}` : '';
    return [figure.name, show(nominal), range, limit, verdict ?? ''];
  });
  const widths = [0, 1, 2, 3, 4].map((column) => Math.max(0, ...rows.map((row) => [...row[column]!].length)));
  const used = widths.flatMap((width, column) => (width > 0 ? [column] : []));
  const pad = (text: string, width: number): string => text + ' '.repeat(width - [...text].length);
  return rows
    .map(
      (row) =>
        `${used
          .map((column) => pad(row[column]!, widths[column]!))
          .join('  ')
          .trimEnd()}\n`,
    )
    .join('');
}

function resultsOf(solved: SolvedNote): readonly FigureResult[] {
  return solved.figureTables.flatMap(({ results }) => results);
}

function figureAsJson({ figure, nominal, minimum, maximum, verdict }: FigureResult): FigureAsJson {
  return {
    value: finite(nominal?.value),
    unit: siUnitText(figure.expression.dimension),
    uncertainty: finite(nominal?.uncertainty),
    min: finite(minimum?.value),
    max: finite(maximum?.value),
    mean: null,
    sd: null,
    verdict: verdict ?? null,
  };
}

function analysisAsJson({ block, runs }: SolvedAnalysis): AnalysisAsJson {
  const total = (count: 'steps' | 'newtonIterations' | 'events'): number =>
    runs.reduce((sum, { solution }) => sum + solution.effort[count], 0);
  const worst = (law: keyof Audit): number | null =>
    finite(Math.max(...runs.map(({ solution }) => solution.audit[law])));
  return {
    find: block.request.find,
    accuracy: block.accuracy,
    steps: total('steps'),
    newtonIterations: total('newtonIterations'),
    events: total('events'),
    audit: { kirchhoff: worst('kirchhoff'), tellegen: worst('tellegen') },
    remarks: [...new Set(runs.flatMap(({ solution }) => solution.remarks))],
  };
}

function problemAsJson({ file, line, column, message, expected, example }: Problem): ProblemAsJson {
  const hint = [expected, example === undefined ? undefined : `for example: ${example}`];
  return { file, line, column, message, hint: hint.filter((part) => part !== undefined).join('; ') };
}

function finite(value: number | undefined): number | null {
  return value !== undefined && Number.isFinite(value) ? value : null;
}
