/** Expressions where an author writes them: read, checked, and their faults put at their place in the file. */
import { checkExpression } from '../expressions/check.ts';
import type { CheckContext, FigureInScope } from '../expressions/context.ts';
import type { CheckedExpression, ExpressionNode } from '../expressions/expression.ts';
import { parseExpression } from '../expressions/parse.ts';
import { type Dimension, equal, nameOf, siUnitText } from './dimensions.ts';
import type { Place } from './model.ts';
import { type Passage, placeOf, report } from './passage.ts';
import { suggestUnits } from './unit-hints.ts';
import { parseUnit } from './units.ts';
import { placeWithin, type YamlNode, type YamlScalar } from './yaml-tree.ts';

/** A text of the file and the way to its places. */
export interface Written {
  readonly text: string;
  readonly passage: Passage;
  readonly place: (start: number, end: number) => Place;
}

/** What expressions of a note can name, and which names are there but could not be read. */
export interface NoteScope extends Omit<CheckContext, 'from' | 'due' | 'dimension' | 'figures'> {
  readonly figures: Map<string, FigureInScope>;
  /** Analyses whose block has a problem: what refers to them is not blamed for it. */
  readonly brokenAnalyses: ReadonlySet<string>;
  readonly brokenFigures: Set<string>;
  /** Lines of all analysis blocks, in the note's order, by name. */
  readonly lines: ReadonlyMap<string, number>;
  /** A circuit could not be read, so names of its components may be right. */
  readonly brokenCircuit: boolean;
}

/** Stands for an analysis whose name was wrong: what is read from it is left unchecked. */
export const UNKNOWN_ANALYSIS = '?';

export type Due = Pick<CheckContext, 'due' | 'dimension'>;

/** The scalar's text, or a part of it. */
export function written(scalar: YamlScalar, start = 0, end = scalar.text.length): Written {
  return {
    text: scalar.text.slice(start, end),
    passage: scalar.passage,
    place: (from, to) => placeWithin(scalar, start + from, start + to),
  };
}

/** The whole of a passage. */
export function writtenPassage(passage: Passage): Written {
  return { text: passage.text, passage, place: (from, to) => placeOf(passage, from, to) };
}

/**
 * Reads and checks an expression. `from` is the analysis of unqualified names. Nothing is returned where it has faults
 * (they are reported) or refers to something that could not be read.
 */
export function readExpression(
  source: Written,
  scope: NoteScope,
  from: string | undefined,
  due: Due,
): CheckedExpression | undefined {
  const { root, faults } = parseExpression(source.text);
  const reportAll = (all: typeof faults) => {
    for (const { span, message, expected, example } of all) {
      report(source.passage, source.place(span.start, Math.max(span.end, span.start + 1)), {
        message,
        ...(expected === undefined ? {} : { expected }),
        ...(example === undefined ? {} : { example }),
      });
    }
  };
  if (!root || faults.length > 0) {
    reportAll(faults);
    return undefined;
  }
  if (dependsOnBroken(root, scope, from)) return undefined;
  const context: CheckContext = { ...scope, ...due, ...(from === undefined ? {} : { from }) };
  const result = checkExpression(source.text, root, context);
  reportAll(result.faults);
  return result.faults.length > 0 ? undefined : result.checked;
}

/** Reads a node as an expression; a list or a mapping is reported. */
export function readExpressionNode(
  node: YamlNode,
  scope: NoteScope,
  from: string | undefined,
  due: Due,
): CheckedExpression | undefined {
  if (node.type === 'scalar') return readExpression(written(node), scope, from, due);
  report(node.passage, node.place, {
    message: `a ${node.type === 'sequence' ? 'list' : 'mapping'} stands where an expression is due`,
    expected: 'an expression; in quotes where it begins with a bracket',
    example: 'mean(D1.i)',
  });
  return undefined;
}

/** Checks a unit in which a value of a dimension is to be shown; nothing if it is wrong (and reported). */
export function readUnitFor(source: Written, dimension: Dimension | undefined): string | undefined {
  const text = source.text.trim();
  const unit = parseUnit(text);
  const complain = (message: string, expected: string) => {
    report(source.passage, source.place(0, source.text.length), { message, expected });
    return undefined;
  };
  const example = dimension ? siUnitText(dimension) : 'mA';
  if (!unit) {
    const suggested = suggestUnits(text, dimension);
    const expected = suggested.length > 0 ? suggested : example === '' ? ['%'] : [example];
    return complain(`\`${text}\` is not a unit`, `e.g. ${expected.map((unitText) => `\`${unitText}\``).join(' or ')}`);
  }
  if (!dimension || equal(unit.dimension, dimension)) return unit.text;
  const expected = example === '' ? 'no unit, or `%`' : `\`${example}\`, with a prefix where it fits`;
  return complain(
    `the value is ${nameOf(dimension)}, and \`${text}\` is the unit of ${nameOf(unit.dimension)}`,
    expected,
  );
}

/** Whether a tree, or the analysis that it is read from, leads to something that could not be read. */
function dependsOnBroken(root: ExpressionNode, scope: NoteScope, from: string | undefined): boolean {
  if (scope.brokenCircuit && scope.analyses.length === 0) return true;
  const visit = (node: ExpressionNode, analysis: string | undefined): boolean => {
    switch (node.type) {
      case 'number':
      case 'foreign':
        return false;
      case 'name':
        if (scope.figures.has(node.name)) return false;
        return scope.brokenFigures.has(node.name) || isBroken(analysis);
      case 'member':
        return isBroken(analysis);
      case 'call':
        return node.arguments.some((argument) => visit(argument, analysis));
      case 'unary':
        return visit(node.operand, analysis);
      case 'binary':
        return visit(node.left, analysis) || visit(node.right, analysis);
      case 'from':
        return visit(node.operand, node.analysis);
    }
  };
  const isBroken = (analysis: string | undefined) =>
    analysis === UNKNOWN_ANALYSIS || scope.brokenAnalyses.has(analysis ?? '');
  return visit(root, from);
}
