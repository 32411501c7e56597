/** Kinds and dimensions of a call's arguments. */
import { DIMENSIONLESS, type Dimension, equal, nameOf, TIME } from '../language/dimensions.ts';
import { list } from '../language/nearest.ts';
import { isQuantity, kindInWords } from './check-operators.ts';
import { type Checker, quote, unitHint } from './checker.ts';
import type { AnalysisInScope } from './context.ts';
import type { ExpressionNode } from './expression.ts';
import {
  FUNCTIONS,
  type FunctionEntry,
  functionNamed,
  type Parameter,
  RESPONSE_FUNCTIONS,
  signature,
} from './functions.ts';
import { nearestFunction, type Typed } from './names.ts';
import { clip } from './tokens.ts';

type Call = ExpressionNode & { type: 'call' };

export function checkCall(checker: Checker, node: Call, analysis: AnalysisInScope | undefined): Typed | undefined {
  const entry = functionNamed(node.function);
  const checked = node.arguments.map((argument) => checker.check(argument, analysis));
  if (!entry) return unknownFunction(checker, node);
  const several = entry.ofNumbers !== undefined && node.arguments.length > 1;
  if (!several && !countFits(checker, node, entry)) return undefined;
  if (checked.includes(undefined)) return undefined;
  const typed = checked as readonly Typed[];
  const fits = several ? areNumbers(checker, node, typed) : argumentsFit(checker, node, entry, typed);
  if (!fits) return undefined;
  const [x] = typed as [Typed];
  const axis = x.axis ?? DIMENSIONLESS;
  const call = {
    type: 'call' as const,
    function: entry.name,
    arguments: typed.map((argument) => argument.node),
    axis,
    span: node.span,
  };
  const dimension = entry.dimension(x.dimension, axis);
  if (entry.result === 'number' || x.axis === undefined) return { kind: 'number', dimension, node: call };
  return { kind: 'waveform', dimension, axis: x.axis, node: call };
}

function unknownFunction(checker: Checker, node: Call): undefined {
  const name = node.function;
  const span = { start: node.span.start, end: node.span.start + name.length };
  if (RESPONSE_FUNCTIONS.includes(name)) {
    return checker.report(span, {
      message: `\`${name}\` is read off a frequency response, and this version solves none`,
      expected: 'a function of a quantity over time',
      example: 'harmonic(C1.v, 1)',
    });
  }
  const names = FUNCTIONS.map((entry) => entry.name);
  const close = nearestFunction(name, names);
  return checker.report(span, {
    message: `there is no function \`${clip(name)}\``,
    expected: close === undefined ? `one of ${list(names, 'or')}` : `\`${close}\` is the nearest name`,
    ...(close === undefined ? {} : { example: functionNamed(close)!.example }),
  });
}

function countFits(checker: Checker, node: Call, entry: FunctionEntry): boolean {
  const given = node.arguments.length;
  const most = entry.parameters.length;
  const least = entry.parameters.filter(({ optional }) => !optional).length;
  if (given >= least && given <= most) return true;
  const due = least === most ? String(least) : `${least} or ${most}`;
  const written = checker.text.slice(node.span.start, node.span.end);
  const hasComma = given > most && /\d,\d/.test(written);
  checker.report(node.span, {
    message: `\`${entry.name}\` takes ${due} argument${due === '1' ? '' : 's'}, and ${given === 0 ? 'none is' : given === 1 ? '1 is' : `${given} are`} given`,
    expected: hasComma ? 'a decimal point in place of the comma' : `\`${signature(entry)}\``,
    example: entry.example,
  });
  return false;
}

/** `max(2 V, 3 V)`: numbers of one dimension. */
function areNumbers(checker: Checker, node: Call, typed: readonly Typed[]): boolean {
  const first = typed[0]!.dimension;
  for (const [k, argument] of typed.entries()) {
    const place = node.arguments[k]!;
    if (argument.kind !== 'number') {
      checker.report(place.span, {
        message: `${quote(checker, place.span)} is ${kindInWords(argument)}, and \`${node.function}\` of several arguments takes numbers`,
        expected: 'each reduced to a number first',
        example: `${node.function}(${node.function}(D1.v), ${node.function}(D2.v))`,
      });
      return false;
    }
    if (!equal(argument.dimension, first)) {
      checker.report(place.span, {
        message: `${quote(checker, place.span)} is ${nameOf(argument.dimension)}, the first argument ${nameOf(first)}`,
        expected: 'numbers of one dimension',
        ...unitHint(checker, place, first),
      });
      return false;
    }
  }
  return true;
}

function argumentsFit(checker: Checker, node: Call, entry: FunctionEntry, typed: readonly Typed[]): boolean {
  const { axis } = typed[0]!;
  if (entry.ofTime && axis && !equal(axis, TIME)) {
    checker.report(node.arguments[0]!.span, {
      message: `\`${entry.name}\` is of a quantity over time, and ${quote(checker, node.arguments[0]!.span)} runs over ${nameOf(axis)}`,
      expected: 'a quantity of a time response',
    });
    return false;
  }
  return typed.every((argument, k) => argumentFits(checker, node, k, entry.parameters[k]!, argument, axis));
}

function argumentFits(
  checker: Checker,
  node: Call,
  index: number,
  parameter: Parameter,
  argument: Typed,
  axis: Dimension | undefined,
): boolean {
  const place = node.arguments[index]!;
  const quoted = quote(checker, place.span);
  const complain = (message: string, expected: string, example?: string): false => {
    checker.report(place.span, { message, expected, ...(example === undefined ? {} : { example }) });
    return false;
  };
  const written = clip(checker.text.slice(place.span.start, place.span.end));
  switch (parameter.kind) {
    case 'waveform':
      if (argument.kind === 'waveform') break;
      if (argument.kind === 'number') {
        return complain(
          `${quoted} is one number already, and \`${node.function}\` is of a quantity over an axis`,
          'the number alone, or a quantity of a time response or a characteristic',
        );
      }
      return complain(
        `${quoted} is ${kindInWords(argument)}, and \`${node.function}\` is of a quantity`,
        'a quantity; `when`, `share`, `first` and `last` are of conditions',
        `share(${written})`,
      );
    case 'condition':
      if (argument.kind === 'condition') break;
      if (argument.kind === 'truth') {
        return complain(
          `${quoted} compares numbers, and \`${node.function}\` is of a condition over an axis`,
          'a comparison of a quantity of a time response or a characteristic',
          functionNamed(node.function)!.example,
        );
      }
      return complain(
        `${quoted} is ${kindInWords(argument)}, and \`${node.function}\` is of a condition`,
        'a comparison',
        functionNamed(node.function)!.example,
      );
    case 'number':
      if (argument.kind === 'number') break;
      return complain(
        `${quoted} is ${kindInWords(argument)}, and one number is due`,
        `a number for \`${parameter.name}\``,
      );
    case 'either':
      if (isQuantity(argument.kind)) break;
      return complain(`${quoted} is ${kindInWords(argument)}, and \`${node.function}\` is of a quantity`, 'a quantity');
  }
  const due = parameter.dimension === 'plain' ? DIMENSIONLESS : parameter.dimension === 'axis' ? axis : undefined;
  if (!due || equal(due, argument.dimension)) return true;
  const hint = unitHint(checker, place, due);
  const called = parameter.kind === 'number' ? `for \`${parameter.name}\` of` : 'in';
  return complain(
    `${quoted} is ${nameOf(argument.dimension)}, and ${nameOf(due)} is due ${called} \`${node.function}\``,
    hint.expected ?? nameOf(due),
    hint.example,
  );
}
