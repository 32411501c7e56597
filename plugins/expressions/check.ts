/** Telling an expression's names apart, and checking kinds and dimensions. */
import { equal, nameOf } from '../language/dimensions.ts';
import { expectedName } from '../language/nearest.ts';
import { checkCall } from './check-call.ts';
import { checkBinary, checkNegation } from './check-operators.ts';
import { type Checker, quote, unitHint } from './checker.ts';
import type { AnalysisInScope, CheckContext } from './context.ts';
import type { CheckedExpression, ExpressionNode, Fault, ResolvedNode, Uses } from './expression.ts';
import { analysisNamed, type FaultWords, resolveMember, resolveName, type Typed } from './names.ts';
import { clip } from './tokens.ts';

/** Checks a tree that `parseExpression` read from `text`. All faults are found at once. Never throws. */
export function checkExpression(
  text: string,
  root: ExpressionNode,
  context: CheckContext,
): { checked?: CheckedExpression; faults: Fault[] } {
  const faults: Fault[] = [];
  const checker: Checker = {
    text,
    context,
    check: (node, analysis) => checkNode(checker, node, analysis),
    report: (span, words) => {
      faults.push({ span, ...words });
      return undefined;
    },
  };
  const typed = checkNode(checker, root, analysisNamed(context, context.from));
  if (!typed || faults.length > 0) return { faults };
  checkDue(checker, root, typed);
  if (faults.length > 0) return { faults };
  const { kind, dimension, node } = typed;
  const analysis = analysisNamed(context, context.from)?.name;
  const checked = { text, root, kind, dimension, resolved: node, uses: usesOf(node) };
  return { checked: analysis === undefined ? checked : { ...checked, analysis }, faults };
}

/** What a node yields; nothing where it has a fault, which is reported. */
function checkNode(checker: Checker, node: ExpressionNode, analysis: AnalysisInScope | undefined): Typed | undefined {
  const { context } = checker;
  const settle = (found: Typed | FaultWords): Typed | undefined =>
    'message' in found ? checker.report(node.span, found) : found;
  switch (node.type) {
    case 'number': {
      const { value, dimension, span } = node;
      return { kind: 'number', dimension, node: { type: 'number', value, span } };
    }
    case 'name':
      return settle(resolveName(node.name, node.span, context, analysis));
    case 'member':
      return settle(resolveMember(node.object, node.path, node.span, context, analysis));
    case 'foreign':
      return settle(resolveForeign(node, context));
    case 'call':
      return checkCall(checker, node, analysis);
    case 'unary': {
      const operand = checkNode(checker, node.operand, analysis);
      return operand && checkNegation(checker, node, operand);
    }
    case 'binary': {
      const left = checkNode(checker, node.left, analysis);
      const right = checkNode(checker, node.right, analysis);
      return left && right && checkBinary(checker, node, left, right);
    }
    case 'from':
      return checkFrom(checker, node);
  }
}

function resolveForeign(node: ExpressionNode & { type: 'foreign' }, context: CheckContext): Typed | FaultWords {
  const { note, figure, span } = node;
  const found = context.foreignFigure?.(note, figure) ?? 'unknown note';
  if (found === 'unknown note') {
    return { message: `there is no note \`${clip(note)}\``, expected: expectedName(note, context.notes ?? []) };
  }
  if (found === 'circle') {
    return {
      message: `note \`${clip(note)}\` takes a figure of this note, so this note can take none of its: they would go round in a circle`,
      expected: 'references in one direction',
    };
  }
  if (found === 'unknown figure') {
    return {
      message: `note \`${note}\` has no figure \`${clip(figure)}\``,
      expected: 'the name of a figure in its `figures` blocks that has no problem of its own',
    };
  }
  return { kind: found.kind, dimension: found.dimension, node: { type: 'figure', name: figure, note, span } };
}

function checkFrom(checker: Checker, node: ExpressionNode & { type: 'from' }): Typed | undefined {
  const { analyses } = checker.context;
  const analysis = analysisNamed(checker.context, node.analysis);
  const place = { start: node.span.end - node.analysis.length, end: node.span.end };
  if (!analysis) {
    const names = analyses.map(({ name }) => name);
    const cut = node.analysis.slice(0, node.analysis.indexOf('-'));
    const isDifference = node.analysis.includes('-') && names.includes(cut);
    return checker.report(place, {
      message: `there is no analysis \`${clip(node.analysis)}\``,
      expected: isDifference ? 'blanks around the `-` of a difference' : expectedName(node.analysis, names),
    });
  }
  const operand = checkNode(checker, node.operand, analysis);
  if (!operand) return undefined;
  if (!readsAnalysis(operand.node)) {
    return checker.report(node.span, {
      message: `nothing in ${quote(checker, node.operand.span)} is read from an analysis`,
      expected: 'a quantity of the circuit before `@`; figures and numbers stand for themselves',
      example: `mean(D1.i) @ ${node.analysis}`,
    });
  }
  return { ...operand, node: { ...operand.node, span: node.span } };
}

/** The kind and the dimension that are due where the expression stands. */
function checkDue(checker: Checker, root: ExpressionNode, typed: Typed): void {
  const { due, dimension } = checker.context;
  const quoted = quote(checker, root.span);
  const written = clip(checker.text.slice(root.span.start, root.span.end));
  if (due === 'number' && typed.kind === 'waveform') {
    checker.report(root.span, {
      message: `${quoted} is a curve over the axis of its analysis, and one number is due`,
      expected: 'a function that makes a number of it, such as `mean`, `max`, `rms` or `at`',
      example: `mean(${written})`,
    });
  } else if (due === 'number' && typed.kind === 'condition') {
    checker.report(root.span, {
      message: `${quoted} holds at some times and not at others, and one number is due`,
      expected: '`when`, `share`, `first` or `last` of the condition',
      example: `when(${written})`,
    });
  } else if ((due === 'number' || due === 'curve') && typed.kind === 'truth') {
    checker.report(root.span, {
      message: `${quoted} is true or false, and a ${due} is due`,
      expected: 'the quantity itself; the limit that it must keep stands under `must`',
    });
  } else if (due === 'curve' && typed.kind === 'condition') {
    checker.report(root.span, {
      message: `${quoted} is a condition, and a curve is due`,
      expected: 'a quantity such as `D1.i`',
    });
  } else if (due === 'condition' && typed.kind !== 'condition') {
    checker.report(root.span, {
      message: `${quoted} is no condition over the axis of an analysis`,
      expected: 'a comparison of a quantity',
      example: 'D1.i > 1 mA',
    });
  } else if (dimension && !equal(dimension, typed.dimension)) {
    checker.report(root.span, {
      message: `${quoted} is ${nameOf(typed.dimension)}, and ${nameOf(dimension)} is due`,
      ...unitHint(checker, root, dimension),
    });
  }
}

function readsAnalysis(node: ResolvedNode): boolean {
  switch (node.type) {
    case 'quantity':
    case 'constant':
      return true;
    case 'number':
    case 'figure':
      return false;
    case 'call':
      return node.arguments.some(readsAnalysis);
    case 'unary':
      return readsAnalysis(node.operand);
    case 'binary':
      return readsAnalysis(node.left) || readsAnalysis(node.right);
  }
}

function usesOf(root: ResolvedNode): Uses {
  const analyses = new Set<string>();
  const figures = new Set<string>();
  const foreign = new Map<string, { note: string; figure: string }>();
  const visit = (node: ResolvedNode): void => {
    if (node.type === 'quantity') analyses.add(node.analysis);
    else if (node.type === 'figure' && node.note === undefined) figures.add(node.name);
    else if (node.type === 'figure') foreign.set(`${node.note}#${node.name}`, { note: node.note!, figure: node.name });
    else if (node.type === 'call') node.arguments.forEach(visit);
    else if (node.type === 'unary') visit(node.operand);
    else if (node.type === 'binary') {
      visit(node.left);
      visit(node.right);
    }
  };
  visit(root);
  return { analyses: [...analyses], figures: [...figures], foreignFigures: [...foreign.values()] };
}
