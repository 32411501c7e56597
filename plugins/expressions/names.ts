/** What the names of an expression stand for: nodes, components and their properties, part data, figures, the axis. */
import { REFERENCE_NODE } from '../../solver/circuit.ts';
import type { Property } from '../../solver/quantities.ts';
import { CHARGE, CURRENT, type Dimension, ENERGY, FLUX, POWER, TIME, VOLTAGE } from '../language/dimensions.ts';
import { expectedName, list, nearest } from '../language/nearest.ts';
import type { AnalysisInScope, CheckContext, CircuitInScope, ComponentInScope } from './context.ts';
import type { ExpressionKind, ResolvedNode, Span } from './expression.ts';
import { ALIASES, functionNamed } from './functions.ts';
import { clip } from './tokens.ts';

/** What a part of an expression yields. */
export interface Typed {
  readonly kind: ExpressionKind;
  readonly dimension: Dimension;
  /** Dimension of the axis, of a waveform or a condition. */
  readonly axis?: Dimension;
  readonly node: ResolvedNode;
}

/** The words of a fault, before its place is known. */
export interface FaultWords {
  readonly message: string;
  readonly expected?: string;
  readonly example?: string;
}

const PROPERTIES: {
  readonly [property in Property]: { readonly dimension: Dimension; readonly of?: readonly string[] };
} = {
  v: { dimension: VOLTAGE },
  i: { dimension: CURRENT },
  p: { dimension: POWER },
  q: { dimension: CHARGE, of: ['capacitor'] },
  flux: { dimension: FLUX, of: ['inductor'] },
  energy: { dimension: ENERGY, of: ['capacitor', 'inductor'] },
};

/** Other words for a property. */
const PROPERTY_WORDS: { readonly [word: string]: Property } = {
  voltage: 'v',
  volts: 'v',
  u: 'v',
  potential: 'v',
  current: 'i',
  amps: 'i',
  power: 'p',
  watts: 'p',
  dissipation: 'p',
  charge: 'q',
  phi: 'flux',
};

export function analysisNamed(context: CheckContext, name: string | undefined): AnalysisInScope | undefined {
  return context.analyses.find((analysis) => analysis.name === name);
}

/** The circuit that names without an analysis refer to, or that of the analysis. */
function circuitOf(context: CheckContext, analysis: AnalysisInScope | undefined): CircuitInScope | undefined {
  const name = analysis?.circuit ?? context.circuit;
  if (name !== undefined) return context.circuits.find((circuit) => circuit.name === name);
  return context.circuits.length === 1 ? context.circuits[0] : undefined;
}

/** The dimension of an analysis's axis; nothing for an operating point, which has none. */
function axisOf(context: CheckContext, analysis: AnalysisInScope): Dimension | undefined {
  if (analysis.find === 'operating point') return undefined;
  if (analysis.find !== 'characteristic') return TIME;
  const swept = circuitOf(context, analysis)?.components.find(({ designator }) => designator === analysis.sweep);
  return swept?.kind === 'current-source' ? CURRENT : VOLTAGE;
}

/** A name without a path: a figure, a node's potential, or the axis. */
export function resolveName(
  name: string,
  span: Span,
  context: CheckContext,
  analysis: AnalysisInScope | undefined,
): Typed | FaultWords {
  const circuit = circuitOf(context, analysis);
  const isNode = name === REFERENCE_NODE || circuit?.components.some(({ nodes }) => nodes.includes(name)) === true;
  const figure = context.figures.get(name);
  if (figure && isNode) {
    return {
      message: `\`${name}\` is the name of a figure and of a node`,
      expected: 'different names; one of the two is to be renamed',
    };
  }
  if (figure) return { ...figure, node: { type: 'figure', name, span } };
  if (isNode) {
    if (!analysis) return noAnalysis(context, `the potential of \`${name}\``);
    return quantity({ node: name }, VOLTAGE, span, context, analysis);
  }
  if (name === 'time' || name === 'swept') {
    if (!analysis) return noAnalysis(context, `\`${name}\``);
    const axis = axisOf(context, analysis);
    const right = axis && (analysis.find === 'characteristic' ? 'swept' : 'time');
    if (axis && right === name) return quantity({ axis: true }, axis, span, context, analysis);
    return {
      message: `\`${analysis.name}\` is ${withArticle(analysis.find)}, which has no \`${name}\``,
      expected: right ? `\`${right}\`, the axis of this analysis` : 'an analysis with an axis',
    };
  }
  return unknownName(name, context, circuit);
}

/** `D1.i`, `C1.value`, `D1.rating.forward_current`. */
export function resolveMember(
  object: string,
  path: readonly string[],
  span: Span,
  context: CheckContext,
  analysis: AnalysisInScope | undefined,
): Typed | FaultWords {
  const circuit = circuitOf(context, analysis);
  if (!circuit) return noAnalysis(context, `\`${object}.${path.join('.')}\``);
  const component = circuit.components.find(({ designator }) => designator === object);
  if (!component) return unknownComponent(object, path, context, circuit);
  const joined = path.join('.');
  const datum = component.data?.get(joined);
  if (datum) {
    const node: ResolvedNode = { type: 'constant', circuit: circuit.name, designator: object, path: joined, span };
    return { kind: 'number', dimension: datum.dimension, node };
  }
  const property = Object.hasOwn(PROPERTIES, joined) ? (joined as Property) : undefined;
  if (!property || !has(component, property)) return unknownProperty(component, joined);
  if (!analysis) return noAnalysis(context, `\`${object}.${joined}\``);
  return quantity({ designator: object, property }, PROPERTIES[property].dimension, span, context, analysis);
}

function quantity(
  reference: Extract<ResolvedNode, { type: 'quantity' }>['quantity'],
  dimension: Dimension,
  span: Span,
  context: CheckContext,
  analysis: AnalysisInScope,
): Typed {
  const axis = axisOf(context, analysis);
  const node: ResolvedNode = { type: 'quantity', analysis: analysis.name, quantity: reference, span };
  return axis ? { kind: 'waveform', dimension, axis, node } : { kind: 'number', dimension, node };
}

function has(component: ComponentInScope, property: Property): boolean {
  const { of } = PROPERTIES[property];
  return of === undefined || of.includes(component.kind);
}

function noAnalysis(context: CheckContext, what: string): FaultWords {
  if (context.analyses.length === 0) {
    return {
      message: `there is no analysis that ${what} could be read from`,
      expected: 'an `analysis` block in this note',
    };
  }
  const names = context.analyses.map(({ name }) => name);
  return {
    message: `it is not said which analysis ${what} is read from`,
    expected: `\`@\` and the name of an analysis, ${names.length === 1 ? '' : 'one of '}${list(names, 'or')}`,
    example: `mean(D1.i) @ ${names[0]}`,
  };
}

function unknownName(name: string, context: CheckContext, circuit: CircuitInScope | undefined): FaultWords {
  const component = circuit?.components.find(({ designator }) => designator === name);
  if (component) {
    return {
      message: `\`${name}\` is a component (${component.kind}), not a quantity`,
      expected: `one of its properties: ${list(propertiesOf(component), 'or')}`,
      example: `${name}.v`,
    };
  }
  const entry = functionNamed(name);
  if (entry) {
    return { message: `\`${name}\` is a function`, expected: 'its arguments in brackets', example: entry.example };
  }
  if (context.analyses.some((analysis) => analysis.name === name)) {
    return {
      message: `\`${name}\` is an analysis, not a quantity`,
      expected: 'a quantity, `@`, and the analysis',
      example: `mean(D1.i) @ ${name}`,
    };
  }
  const elsewhere = context.circuits.find(({ components }) => components.some(({ nodes }) => nodes.includes(name)));
  const nodes = new Set(circuit?.components.flatMap((each) => each.nodes) ?? []);
  const designators = circuit?.components.map(({ designator }) => designator) ?? [];
  const close = nearest(name, [...nodes, ...context.figures.keys(), ...designators]);
  return {
    message: circuit
      ? `there is no node and no figure \`${clip(name)}\`${elsewhere ? ` for circuit \`${circuit.name}\`` : ''}`
      : `there is no figure \`${clip(name)}\``,
    expected:
      close !== undefined
        ? `\`${designators.includes(close) ? `${close}.v` : close}\` is the nearest name`
        : elsewhere
          ? `an analysis of circuit \`${elsewhere.name}\`, which has that node, after \`@\``
          : expectedName(name, [...nodes, ...context.figures.keys()]),
  };
}

function unknownComponent(
  object: string,
  path: readonly string[],
  context: CheckContext,
  circuit: CircuitInScope,
): FaultWords {
  const written = clip(`${object}.${path.join('.')}`);
  if (circuit.components.some(({ nodes }) => nodes.includes(object))) {
    return { message: `\`${written}\`: \`${object}\` is a node`, expected: `\`${object}\` alone, its potential` };
  }
  if (context.figures.has(object)) {
    return { message: `\`${written}\`: \`${object}\` is a figure`, expected: `\`${object}\` alone, its value` };
  }
  const elsewhere = context.circuits.find(({ components }) =>
    components.some(({ designator }) => designator === object),
  );
  const designators = circuit.components.map(({ designator }) => designator);
  return {
    message: `there is no component \`${clip(object)}\` in circuit \`${circuit.name}\``,
    expected: elsewhere
      ? `an analysis of circuit \`${elsewhere.name}\`, which has it, after \`@\``
      : expectedName(object, designators),
  };
}

function unknownProperty(component: ComponentInScope, path: string): FaultWords {
  const { designator, kind } = component;
  const names = propertiesOf(component);
  const lower = path.toLowerCase();
  const word = Object.hasOwn(PROPERTY_WORDS, lower) ? PROPERTY_WORDS[lower] : undefined;
  const owned = names.find((name) => name.endsWith(`.${lower}`));
  const close = word !== undefined && names.includes(word) ? word : (owned ?? nearest(path, names));
  return {
    message: `\`${designator}\` (${kind}) has no \`${clip(path)}\``,
    expected:
      close === undefined
        ? `one of ${list(
            names.map((name) => `${designator}.${name}`),
            'or',
          )}`
        : `\`${designator}.${close}\` is the nearest name`,
    example: `${designator}.${close ?? 'i'}`,
  };
}

function propertiesOf(component: ComponentInScope): string[] {
  const properties = (Object.keys(PROPERTIES) as Property[]).filter((property) => has(component, property));
  return [...properties, ...(component.data?.keys() ?? [])];
}

/** The nearest function, also for the usual other names. */
export function nearestFunction(name: string, names: readonly string[]): string | undefined {
  const lower = name.toLowerCase();
  return Object.hasOwn(ALIASES, lower) ? ALIASES[lower] : nearest(name, names);
}

function withArticle(find: string): string {
  return `${/^[aeiou]/.test(find) ? 'an' : 'a'} ${find}`;
}
