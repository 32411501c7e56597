/** Which analysis the unqualified names of a block or of a computed value are read from. */
import type { CheckContext } from '../expressions/context.ts';
import type { AnalysisReading } from './analysis-block.ts';
import type { CircuitReading } from './circuit-block.ts';
import type { Fence } from './fences.ts';
import { expectedName } from './nearest.ts';
import { report } from './passage.ts';
import { type NoteScope, UNKNOWN_ANALYSIS } from './written-expression.ts';
import { entryOf, type YamlMapping } from './yaml-tree.ts';

/** What the expressions of a note can name; figures are added while their blocks are read. */
export function noteScope(
  circuits: readonly CircuitReading[],
  analyses: readonly AnalysisReading[],
  more: Pick<CheckContext, 'foreignFigure' | 'notes'>,
): NoteScope {
  const sound = analyses.flatMap(({ block }) => (block ? [block] : []));
  return {
    analyses: sound.map(({ name, circuit, request }) => ({
      name,
      find: request.find,
      circuit,
      ...(request.find === 'characteristic' ? { sweep: request.sweep } : {}),
    })),
    circuits: circuits.flatMap(({ block }) =>
      block
        ? [
            {
              name: block.name,
              components: block.components.map(({ designator, kind, nodes, data }) => ({
                designator,
                kind,
                nodes,
                data: new Map(Object.entries(data ?? {})),
              })),
            },
          ]
        : [],
    ),
    figures: new Map(),
    brokenAnalyses: new Set(analyses.flatMap(({ name, block }) => (block ? [] : [name]))),
    brokenFigures: new Set(),
    brokenCircuit: circuits.some(({ block }) => !block),
    lines: new Map(analyses.map(({ name, fence }) => [name, fence.line])),
    ...more,
  };
}

/** The nearest analysis above a line, else the first of the note; one that could not be read counts. */
export function nearestAnalysis(scope: NoteScope, line: number): string | undefined {
  const all = [...scope.lines];
  return all.findLast(([, start]) => start < line)?.[0] ?? all[0]?.[0];
}

/** The analysis of a block: its `from`, or the nearest above. A name that is none is reported. */
export function analysisOf(fence: Fence, tree: YamlMapping, scope: NoteScope): string | undefined {
  const entry = entryOf(tree, 'from');
  if (!entry) return nearestAnalysis(scope, fence.line);
  const { value } = entry;
  const wanted = value.type === 'scalar' ? value.text.trim() : '';
  const names = [...scope.analyses.map((analysis) => analysis.name), ...scope.brokenAnalyses];
  if (names.includes(wanted)) return wanted;
  report(value.passage, value.place, {
    message: value.type === 'scalar' ? `there is no analysis \`${wanted}\` in this note` : '`from` is not a name',
    expected: names.length === 0 ? 'an `analysis` block' : expectedName(wanted, names),
  });
  return UNKNOWN_ANALYSIS;
}
