/** The body of a `figures` block: named numbers, and the limits that they must keep. */
import type { Words } from '../problems.ts';
import * as dues from './dues.ts';
import type { Fence } from './fences.ts';
import { type Field, type FieldValues, readFields } from './fields.ts';
import { readLimit } from './limit.ts';
import type { Figure, FiguresBlock, Place } from './model.ts';
import { checkName } from './names.ts';
import { report } from './passage.ts';
import { analysisOf } from './scope.ts';
import { type NoteScope, readExpressionNode, readUnitFor, written } from './written-expression.ts';
import { readYaml, reportRepeatedKeys, type YamlEntry, type YamlScalar } from './yaml-tree.ts';

const TEXT = { form: 'text' } as const;

export const FIGURE_FIELDS: readonly Field[] = [
  {
    key: 'is',
    doc: 'the expression',
    takes: { form: 'structure', words: 'an expression, e.g. `mean(D1.i)`' },
    required: true,
  },
  { key: 'label', doc: 'its name in words', takes: TEXT },
  { key: 'symbol', doc: 'its symbol, e.g. `I_F(av)`', takes: TEXT },
  { key: 'in', doc: 'the unit shown', takes: TEXT },
  { key: 'digits', doc: 'significant digits', takes: { form: 'quantity', due: { ...dues.NUMBER, example: '3' } } },
  {
    key: 'must',
    doc: 'the limits that it must keep',
    takes: { form: 'structure', words: '`< 20 mA`, `>= 2 mA` or `2 mA .. 20 mA`' },
  },
  { key: 'requirement', doc: 'the requirement that states the limits', takes: TEXT },
  { key: 'hidden', doc: 'kept for prose alone', takes: { form: 'truth' }, default: 'false' },
];

const BLOCK_KEYS = ['from', 'caption'];
const LARGEST_DIGITS = 15;

const NO_FIGURES: Words = {
  message: 'this block has no figures',
  expected: '`name: expression` lines',
  example: 'lamp_mean: mean(D1.i)',
};

/**
 * Reads the block. Figures that can be read are in the result and in the scope; `seen` holds the lines of all names of
 * the note, which are unique.
 */
export function readFiguresBlock(
  fence: Fence,
  name: string,
  scope: NoteScope,
  seen: Map<string, number>,
): FiguresBlock | undefined {
  const passage = fence.body;
  const start: Place = { line: fence.line, column: fence.namePlace.column, length: fence.namePlace.length };
  const problemsBefore = passage.problems.length;
  const tree = readYaml(passage);
  if (tree?.type !== 'mapping') {
    if (tree || passage.problems.length === problemsBefore) report(passage, tree?.place ?? start, NO_FIGURES);
    return undefined;
  }
  reportRepeatedKeys(tree, (path, entry, first) =>
    path.length > 0
      ? undefined
      : {
          message: `two figures are called \`${entry.key}\`: the other stands in line ${first.keyNode.place.line}`,
          expected: 'a name for each figure',
        },
  );
  const from = analysisOf(fence, tree, scope);
  const caption = tree.entries.find((entry) => entry.key === 'caption')?.value;
  const figures: Figure[] = [];
  for (const entry of tree.entries) {
    if (BLOCK_KEYS.includes(entry.key)) continue;
    const figureName = checkName(entry.keyNode, 'a figure');
    const earlier = seen.get(entry.key);
    if (earlier !== undefined) {
      report(passage, entry.keyNode.place, {
        message: `a figure \`${entry.key}\` stands already in line ${earlier}`,
        expected: 'a name that is unique in the note',
      });
    } else seen.set(entry.key, entry.keyNode.place.line);
    const figure = readFigure(entry, scope, from);
    if (figure && figureName !== undefined && earlier === undefined) {
      figures.push(figure);
      scope.figures.set(entry.key, { kind: figure.expression.kind, dimension: figure.expression.dimension });
    } else if (earlier === undefined) scope.brokenFigures.add(entry.key);
  }
  if (tree.entries.every((entry) => BLOCK_KEYS.includes(entry.key))) report(passage, start, NO_FIGURES);
  return {
    kind: 'figures',
    name,
    line: fence.line,
    endLine: fence.endLine,
    source: passage.text,
    ...(caption?.type === 'scalar' && caption.text !== '' ? { caption: caption.text.trim() } : {}),
    figures,
  };
}

function readFigure(entry: YamlEntry, scope: NoteScope, from: string | undefined): Figure | undefined {
  const { key: name, value, keyNode } = entry;
  const { place } = keyNode;
  if (value.type !== 'mapping') {
    if (value.type === 'scalar' && value.text.trim() === '') {
      report(value.passage, place, {
        message: `the figure \`${name}\` has no expression`,
        expected: 'an expression',
        example: `${name}: mean(D1.i)`,
      });
      return undefined;
    }
    const expression = readExpressionNode(value, scope, from, { due: 'number' });
    return expression && { name, expression, hidden: false, place };
  }
  const values = readFields(value, FIGURE_FIELDS, `the figure \`${name}\``, place);
  const is = values.entries.get('is');
  const expression = is && readExpressionNode(is.value, scope, from, { due: 'number' });
  const unit = readUnit(values, expression?.dimension);
  const digits = readDigits(values);
  const mustEntry = values.entries.get('must');
  const must = mustEntry && readLimit(mustEntry.value, scope, from, expression?.dimension);
  if (!expression || !values.ok || unit === 'wrong' || digits === 'wrong' || (mustEntry && !must)) return undefined;
  const text = <K extends 'label' | 'symbol' | 'requirement'>(key: K) =>
    values.texts.get(key) ? { [key]: values.texts.get(key)! } : {};
  return {
    name,
    expression,
    ...text('label'),
    ...text('symbol'),
    ...(unit === undefined ? {} : { unit }),
    ...(digits === undefined ? {} : { digits }),
    ...(must ? { must } : {}),
    ...text('requirement'),
    hidden: values.truths.get('hidden') ?? false,
    place,
  };
}

function readUnit(values: FieldValues, dimension: Parameters<typeof readUnitFor>[1]): string | undefined | 'wrong' {
  const entry = values.entries.get('in');
  if (!entry) return undefined;
  if (entry.value.type !== 'scalar') return 'wrong';
  return readUnitFor(written(entry.value), dimension) ?? 'wrong';
}

function readDigits(values: FieldValues): number | undefined | 'wrong' {
  const scalar = values.quantities.get('digits');
  if (!scalar) return undefined;
  if (Number.isInteger(scalar.value) && scalar.value >= 1 && scalar.value <= LARGEST_DIGITS) return scalar.value;
  const node = values.entries.get('digits')!.value as YamlScalar;
  report(node.passage, node.place, {
    message: `\`${scalar.text}\` is not a number of significant digits`,
    expected: `a whole number from 1 to ${LARGEST_DIGITS}`,
  });
  return 'wrong';
}
