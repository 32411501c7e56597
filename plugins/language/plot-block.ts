/** The body of a `plot` block: quantities to draw over time, or over the swept value, or one against another. */
import type { CheckedExpression } from '../expressions/expression.ts';
import type { Words } from '../problems.ts';
import { equal, nameOf } from './dimensions.ts';
import type { Fence } from './fences.ts';
import { type Field, readFields } from './fields.ts';
import type { Place, PlotBlock, PlotLine } from './model.ts';
import { report } from './passage.ts';
import { analysisOf } from './scope.ts';
import { readVegaProperties } from './vega-properties.ts';
import { type NoteScope, readExpressionNode, readUnitFor, written } from './written-expression.ts';
import { readYaml, reportRepeatedKeys, type YamlEntry, type YamlNode } from './yaml-tree.ts';

const TEXT = { form: 'text' } as const;
const LINES = { form: 'structure', words: 'a list of expressions, e.g. `[G1.v, C1.v]`' } as const;

export const PLOT_FIELDS: readonly Field[] = [
  { key: 'title', doc: 'the title', takes: TEXT },
  { key: 'caption', doc: 'shown under the plot', takes: TEXT },
  { key: 'from', doc: 'the analysis; default: the nearest above', takes: TEXT },
  { key: 'lines', doc: 'what is drawn over the left axis', takes: LINES },
  { key: 'right', doc: 'what is drawn over a second axis', takes: LINES },
  { key: 'against', doc: 'the horizontal axis in place of time', takes: { form: 'structure', words: 'an expression' } },
  {
    key: 'mark',
    doc: 'stretches to shade: a label and the condition that holds there',
    takes: { form: 'structure', words: 'e.g. `{ dead time: abs(C1.i) < 1 µA }`' },
  },
  { key: 'bands', doc: 'of a spread; not in this version', takes: TEXT },
  { key: 'vega', doc: 'merged into the Vega-Lite specification', takes: { form: 'structure', words: 'a mapping' } },
];

export const LINE_FIELDS: readonly Field[] = [
  { key: 'is', doc: 'the expression', takes: { form: 'structure', words: 'an expression' }, required: true },
  { key: 'label', doc: 'its name in the legend', takes: TEXT },
  { key: 'in', doc: 'the unit of its axis', takes: TEXT },
];

const NO_LINES: Words = {
  message: 'this plot has nothing to draw',
  expected: '`lines`, with one expression at least',
  example: 'lines: [G1.v, C1.v]',
};

export function readPlotBlock(fence: Fence, name: string, scope: NoteScope): PlotBlock | undefined {
  const passage = fence.body;
  const start: Place = { line: fence.line, column: fence.namePlace.column, length: fence.namePlace.length };
  const problemsBefore = passage.problems.length;
  const tree = readYaml(passage);
  if (tree?.type !== 'mapping') {
    if (tree || passage.problems.length === problemsBefore) report(passage, tree?.place ?? start, NO_LINES);
    return undefined;
  }
  reportRepeatedKeys(tree);
  const values = readFields(tree, PLOT_FIELDS, 'a plot', start);
  const from = analysisOf(fence, tree, scope);
  const analysis = scope.analyses.find((candidate) => candidate.name === from);
  const complain = (key: string, words: Words) => {
    const entry = values.entries.get(key);
    report(passage, entry?.keyNode.place ?? start, words);
    return undefined;
  };
  if (analysis?.find === 'operating point') {
    return complain('from', {
      message: `the analysis \`${analysis.name}\` finds an operating point, which has no axis to draw over`,
      expected: 'a `characteristic` or a `time response`',
    });
  }
  if (values.entries.has('bands')) {
    return complain('bands', {
      message: 'this version does not draw the bands of a spread yet',
      expected: 'a plot without `bands`',
    });
  }
  const lines = readLines(values.entries.get('lines'), scope, from);
  const right = readLines(values.entries.get('right'), scope, from);
  const againstEntry = values.entries.get('against');
  const against = againstEntry && readCurve(againstEntry.value, scope, from);
  const marks = readMarks(values.entries.get('mark'), scope, from);
  const vega = readVega(values.entries.get('vega'));
  if (!values.entries.has('lines') && !values.entries.has('right') && values.ok) return complain('lines', NO_LINES);
  if (!values.ok || !lines || !right || !marks || vega === 'wrong' || (againstEntry && !against)) return undefined;
  if (from === undefined) {
    return complain('from', { message: 'there is no analysis to draw from', expected: 'an `analysis` block' });
  }
  const text = <K extends 'title' | 'caption'>(key: K) =>
    values.texts.get(key) ? { [key]: values.texts.get(key)! } : {};
  return {
    kind: 'plot',
    name,
    line: fence.line,
    endLine: fence.endLine,
    source: passage.text,
    ...text('title'),
    ...text('caption'),
    from,
    lines,
    right,
    ...(against ? { against } : {}),
    marks,
    ...(vega ? { vega } : {}),
  };
}

function readLines(entry: YamlEntry | undefined, scope: NoteScope, from: string | undefined): PlotLine[] | undefined {
  if (!entry) return [];
  const items = entry.value.type === 'sequence' ? entry.value.items : [entry.value];
  if (items.length === 0) {
    report(entry.value.passage, entry.keyNode.place, NO_LINES);
    return undefined;
  }
  const lines = items.map((item) => readLine(item, scope, from));
  const read = lines.filter((line) => line !== undefined);
  if (!oneAxis(entry, items, lines) || read.length < lines.length) return undefined;
  return read;
}

function readLine(node: YamlNode, scope: NoteScope, from: string | undefined): PlotLine | undefined {
  if (node.type !== 'mapping') {
    const expression = readExpressionNode(node, scope, from, { due: 'curve' });
    return expression && { expression };
  }
  const values = readFields(node, LINE_FIELDS, 'a line');
  const is = values.entries.get('is');
  const expression = is && readExpressionNode(is.value, scope, from, { due: 'curve' });
  const unitNode = values.entries.get('in')?.value;
  const unit = unitNode?.type === 'scalar' ? readUnitFor(written(unitNode), expression?.dimension) : undefined;
  if (!expression || !values.ok || (unitNode && unit === undefined)) return undefined;
  const label = values.texts.get('label');
  return { expression, ...(label ? { label } : {}), ...(unit === undefined ? {} : { unit }) };
}

/** Whether all lines of an axis are of one dimension and ask for one unit. */
function oneAxis(entry: YamlEntry, items: readonly YamlNode[], lines: readonly (PlotLine | undefined)[]): boolean {
  const first = lines.find((line) => line !== undefined);
  const unit = lines.find((line) => line?.unit !== undefined)?.unit;
  let sound = true;
  for (const [index, line] of lines.entries()) {
    if (!line || !first) continue;
    const { dimension } = line.expression;
    const place = items[index]!.place;
    if (!equal(dimension, first.expression.dimension)) {
      report(entry.value.passage, place, {
        message: `this is ${nameOf(dimension)}, and its axis carries ${nameOf(first.expression.dimension)}`,
        expected:
          entry.key === 'right'
            ? 'quantities of one kind on an axis'
            : 'the other quantity in `right`, or in a plot of its own',
        example: 'right: [C1.i]',
      });
      sound = false;
    } else if (line.unit !== undefined && line.unit !== unit) {
      report(entry.value.passage, place, {
        message: `this asks for \`${line.unit}\`, and its axis is in \`${unit}\``,
        expected: 'one unit on an axis',
      });
      sound = false;
    }
  }
  return sound;
}

function readCurve(node: YamlNode, scope: NoteScope, from: string | undefined): CheckedExpression | undefined {
  const expression = readExpressionNode(node, scope, from, { due: 'curve' });
  if (!expression || expression.kind === 'waveform') return expression;
  report(node.passage, node.place, {
    message: `\`${expression.text.trim()}\` is one number, and an axis needs a quantity that changes`,
    expected: 'a voltage or a current of the analysis',
    example: 'against: D1.v',
  });
  return undefined;
}

function readMarks(
  entry: YamlEntry | undefined,
  scope: NoteScope,
  from: string | undefined,
): PlotBlock['marks'] | undefined {
  if (!entry) return [];
  if (entry.value.type !== 'mapping') {
    report(entry.value.passage, entry.value.place, {
      message: '`mark` is not a mapping',
      expected: 'a label and a condition for each stretch',
      example: 'mark: { dead time: abs(C1.i) < 1 µA }',
    });
    return undefined;
  }
  const marks = entry.value.entries.map(({ key, value }) => {
    const when = readExpressionNode(value, scope, from, { due: 'condition' });
    return when && { when, label: key };
  });
  const read = marks.filter((mark) => mark !== undefined);
  return read.length < marks.length ? undefined : read;
}

function readVega(entry: YamlEntry | undefined): { readonly [key: string]: unknown } | undefined | 'wrong' {
  if (!entry) return undefined;
  if (entry.value.type !== 'mapping') {
    report(entry.value.passage, entry.value.place, {
      message: '`vega` is not a mapping',
      expected: 'properties of a Vega-Lite specification',
      example: 'vega: { height: 260 }',
    });
    return 'wrong';
  }
  return readVegaProperties(entry.value) ?? 'wrong';
}
