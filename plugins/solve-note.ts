/**
 * From a checked note to its results: every analysis is solved, every figure, plot and number of the prose measured, and whatever the figures'
 * accuracy asks for is solved again more tightly. Author's mistakes that only show here join the note's problems.
 */
import { isOverTime } from '../solver/analysis.ts';
import type { CheckedExpression } from './expressions/expression.ts';
import { judge } from './judge.ts';
import type { Figure, Note } from './language/model.ts';
import { measurePlot } from './measure/plot.ts';
import { createNoteScope, measureOverRuns, type NoteScope } from './measure/scope.ts';
import { fileText, type Problem, problemAt, sortProblems, type Words } from './problems.ts';
import type { FigureResult, FigureTable, Measured, SolvedAnalysis, SolvedInlineValue, SolvedNote } from './results.ts';
import { type AnalysisState, refineAnalysis, startAnalysis } from './solve-analysis.ts';

/** Times that an analysis is solved again, ten times more tightly, before its figures' uncertainty is accepted as it is. */
const REFINEMENTS = 3;

export interface SolveOptions {
  /** Value of a figure of another note, SI; undefined where it has none. */
  readonly foreignFigure?: (note: string, figure: string) => number | undefined;
}

export function solveNote(note: Note, options: SolveOptions = {}): SolvedNote {
  const text = fileText(note.file, note.text);
  const problems: Problem[] = [...note.problems];
  const report = (place: { line: number; column: number; length: number }, words: Words): void => {
    problems.push(problemAt(text, place, words));
  };
  const circuits = note.blocks.filter((block) => block.kind === 'circuit');
  const states = new Map<string, AnalysisState>();
  for (const block of note.blocks) {
    if (block.kind !== 'analysis') continue;
    const circuit = circuits.find(({ name }) => name === block.circuit);
    if (!circuit) continue;
    const started = startAnalysis(block, circuit.circuit);
    if ('failure' in started) {
      const fence = text.lines[block.line - 1] ?? '';
      report({ line: block.line, column: 1, length: Math.max(1, fence.length) }, started.failure);
    } else states.set(block.name, started);
  }
  const scope = createNoteScope(note, states, options.foreignFigure ?? (() => undefined));
  const figures = note.blocks.flatMap((block) => (block.kind === 'figures' ? block.figures : []));
  refineWhereNeeded(note, figures, states, scope);

  const explain = (place: { line: number; column: number; length: number }, subject: string, reason: string): void =>
    report(place, { message: `${subject} has no value: ${reason}` });
  const tables: FigureTable[] = [];
  for (const block of note.blocks) {
    if (block.kind !== 'figures') continue;
    const results = block.figures.map((figure): FigureResult => {
      const measured = measureFigure(figure, scope);
      if (measured.reason !== undefined) {
        explain(figure.place, `figure '${figure.name}'`, measured.reason);
      }
      return measured.result;
    });
    tables.push({ block, results });
  }
  const plots = note.blocks.flatMap((block) => {
    if (block.kind !== 'plot') return [];
    const plot = measurePlot(block, note, states, scope);
    for (const reason of plot.failures) {
      report(
        { line: block.line, column: 1, length: (text.lines[block.line - 1] ?? ' ').length || 1 },
        { message: reason },
      );
    }
    return plot.solved ? [plot.solved] : [];
  });
  const inlineValues = note.inlineValues.map((inline): SolvedInlineValue => {
    const outcome = measureOverRuns(inline.expression, scope);
    if ('pending' in outcome) return { inline };
    if ('reason' in outcome) {
      explain(inline.place, `\`${inline.expression.text}\``, outcome.reason);
      return { inline };
    }
    return { inline, measured: outcome.runs[0]! };
  });
  const analyses: SolvedAnalysis[] = [...states.values()].map(({ block, runs }) => ({ block, runs }));
  return { note, problems: sortProblems(problems), circuits, analyses, figureTables: tables, plots, inlineValues };
}

/** Solves analyses again until every figure that draws on them is as certain as its analysis asks. */
function refineWhereNeeded(
  note: Note,
  figures: readonly Figure[],
  states: Map<string, AnalysisState>,
  scope: NoteScope,
): void {
  const expressions: readonly CheckedExpression[] = [
    ...figures.map(({ expression }) => expression),
    ...note.inlineValues.map(({ expression }) => expression),
  ];
  for (let round = 0; round < REFINEMENTS; round++) {
    const wanting = new Set<string>();
    for (const expression of expressions) {
      const outcome = measureOverRuns(expression, scope);
      if (!('runs' in outcome)) continue;
      const analyses = scope.analysesOf(expression);
      const accuracy = Math.min(...analyses.map((name) => states.get(name)?.block.accuracy ?? 1));
      // a figure that is zero to within its uncertainty gets no more certain in relation to itself
      const uncertain = outcome.runs.some(
        ({ value, uncertainty }) =>
          uncertainty > accuracy * Math.abs(value) && (round === 0 || uncertainty < Math.abs(value)),
      );
      if (uncertain) for (const name of analyses) wanting.add(name);
    }
    let refined = false;
    for (const name of wanting) {
      const state = states.get(name);
      if (!state || !isOverTime(state.block.request)) continue;
      if (refineAnalysis(state)) refined = true;
    }
    if (!refined) return;
    scope.forget();
  }
}

function measureFigure(figure: Figure, scope: NoteScope): { result: FigureResult; reason?: string } {
  const { expression, must } = figure;
  const analysis = scope.analysesOf(expression)[0];
  const conditions = scope.conditionsOf(expression);
  const empty: FigureResult = { figure, conditions, ...(analysis === undefined ? {} : { analysis }) };
  const outcome = measureOverRuns(expression, scope);
  if ('pending' in outcome) return { result: empty };
  if ('reason' in outcome) return { result: empty, reason: outcome.reason };
  const { runs } = outcome;
  const order = (a: Measured, b: Measured): number => a.value - b.value;
  const sorted = runs.slice().sort(order);
  const family = runs.length > 1 ? { minimum: sorted[0]!, maximum: sorted.at(-1)! } : {};
  const result: FigureResult = { ...empty, nominal: runs[0]!, ...family };
  if (!must) return { result };
  const bounds = {
    lower: must.lower && measureOverRuns(must.lower.bound, scope),
    upper: must.upper && measureOverRuns(must.upper.bound, scope),
  };
  for (const bound of [bounds.lower, bounds.upper]) {
    if (bound && 'pending' in bound) return { result };
    if (bound && 'reason' in bound) return { result, reason: `its limit \`${must.text}\` has none: ${bound.reason}` };
  }
  const lower = bounds.lower && 'runs' in bounds.lower ? bounds.lower.runs : undefined;
  const upper = bounds.upper && 'runs' in bounds.upper ? bounds.upper.runs : undefined;
  return { result: { ...result, ...judge(runs, must, lower, upper) } };
}
