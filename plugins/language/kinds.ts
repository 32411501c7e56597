/** The kinds of component: one table that reads them, and from which documentation and a schema can be made. */
import type { ComponentKind } from '../../solver/circuit.ts';
import type { ComponentInput, ComponentOutput } from './components/context.ts';
import { CONTROLLED_SOURCE_FIELDS, readControlledSource } from './components/controlled-source.ts';
import { CURVE_FIELDS, readCurve } from './components/curve.ts';
import { EXPONENTIAL_FIELDS, TEMPERATURE_FIELDS, THRESHOLD_FIELDS } from './components/diode-fields.ts';
import { readDiode } from './components/diodes.ts';
import { LINEAR_FIELDS, LINEAR_VALUES, readLinear } from './components/linear.ts';
import { readSource, SOURCE_FIELDS } from './components/sources.ts';
import { DRIVEN_SWITCH_FIELDS, readSwitch, TIMED_SWITCH_FIELDS } from './components/switch.ts';
import { waveFields } from './components/waves.ts';
import * as dues from './dues.ts';
import type { Field } from './fields.ts';
import type { Due } from './scalar.ts';

export interface Kind {
  readonly kind: ComponentKind;
  readonly doc: string;
  /** The quantity that may stand as the kind's value. */
  readonly value?: Due;
  /** Whether the value may be the name of a part. */
  readonly part: boolean;
  /** The mappings that may stand as the kind's value, each by what tells it apart. */
  readonly forms: { readonly [form: string]: readonly Field[] };
  /** Keys of the component beside its kind and `nodes`. */
  readonly beside: readonly Field[];
  /** A right component. */
  readonly example: string;
  readonly read: (input: ComponentInput) => ComponentOutput | undefined;
}

const DIODE_FORMS = { exponential: EXPONENTIAL_FIELDS, threshold: THRESHOLD_FIELDS, temperature: TEMPERATURE_FIELDS };

export const KINDS: readonly Kind[] = [
  {
    kind: 'resistor',
    doc: 'a resistance',
    value: LINEAR_VALUES.resistor,
    part: true,
    forms: {},
    beside: LINEAR_FIELDS,
    example: 'R1: { resistor: 47 Ω ±5 %, nodes: [line, a] }',
    read: (input) => readLinear(input, 'resistor'),
  },
  {
    kind: 'capacitor',
    doc: 'a capacitance',
    value: LINEAR_VALUES.capacitor,
    part: true,
    forms: {},
    beside: LINEAR_FIELDS,
    example: 'C1: { capacitor: 1 µF ±10 %, nodes: [a, gnd] }',
    read: (input) => readLinear(input, 'capacitor'),
  },
  {
    kind: 'inductor',
    doc: 'an inductance',
    value: LINEAR_VALUES.inductor,
    part: true,
    forms: {},
    beside: LINEAR_FIELDS,
    example: 'L1: { inductor: 10 µH, nodes: [a, b] }',
    read: (input) => readLinear(input, 'inductor'),
  },
  {
    kind: 'source',
    doc: 'a source of voltage: the wave is its first node less its second',
    value: { ...dues.VOLTAGE, tolerance: true },
    part: false,
    forms: waveFields(dues.VOLTAGE),
    beside: SOURCE_FIELDS,
    example: 'G1: { source: { sine: { peak: 34 V, frequency: 50 Hz } }, nodes: [line, gnd] }',
    read: (input) => readSource(input, 'source'),
  },
  {
    kind: 'current-source',
    doc: 'a source of current: the wave flows into its first node',
    value: { ...dues.CURRENT, tolerance: true },
    part: false,
    forms: waveFields(dues.CURRENT),
    beside: SOURCE_FIELDS,
    example: 'G2: { current-source: 1 mA, nodes: [a, gnd] }',
    read: (input) => readSource(input, 'current-source'),
  },
  {
    kind: 'controlled-source',
    doc: 'a source driven by a voltage or a current elsewhere',
    part: false,
    forms: { 'controlled source': CONTROLLED_SOURCE_FIELDS },
    beside: [],
    example: 'E1: { controlled-source: { gain: 100, sensing: [p, n] }, nodes: [out, gnd] }',
    read: readControlledSource,
  },
  {
    kind: 'switch',
    doc: 'a contact, driven by times or by a voltage',
    part: false,
    forms: { 'by time': TIMED_SWITCH_FIELDS, 'by voltage': DRIVEN_SWITCH_FIELDS },
    beside: [],
    example: 'S1: { switch: { closes: [1 ms, 5 ms], opens: [3 ms] }, nodes: [a, b] }',
    read: readSwitch,
  },
  {
    kind: 'diode',
    doc: 'a diode: the first node is its anode',
    part: true,
    forms: DIODE_FORMS,
    beside: [],
    example: 'D1: { diode: { law: exponential, saturation_current: 1 fA, ideality: 1.8 }, nodes: [a, k] }',
    read: (input) => readDiode(input, 'diode'),
  },
  {
    kind: 'led',
    doc: 'a light-emitting diode: the first node is its anode',
    part: true,
    forms: DIODE_FORMS,
    beside: [],
    example: 'D1: { led: green-3mm, nodes: [lamp, gnd] }',
    read: (input) => readDiode(input, 'led'),
  },
  {
    kind: 'zener',
    doc: 'a breakdown diode: the first node is its anode',
    value: { ...dues.VOLTAGE, example: '5.6 V', tolerance: true },
    part: true,
    forms: DIODE_FORMS,
    beside: [],
    example: 'D1: { zener: 5.6 V, nodes: [gnd, out] }',
    read: (input) => readDiode(input, 'zener'),
  },
  {
    kind: 'curve',
    doc: 'a two-terminal given by a table of volts and amperes',
    part: false,
    forms: { table: CURVE_FIELDS },
    beside: [],
    example: 'X1: { curve: [[0 V, 0 mA], [2 V, 10 mA]], nodes: [a, gnd] }',
    read: readCurve,
  },
];

/** Kinds of the language that this version does not solve. */
export const KINDS_TO_COME = [
  'coupling',
  'transformer',
  'bridge',
  'npn',
  'pnp',
  'nmos',
  'pmos',
  'opamp',
  'use',
] as const;
