/** The published and recomputed problems that circuits of these kinds can express, as notes. Sources: the JSON files beside this one. */
import { type NoteCase, reference } from './note-case.ts';

/** k 300 K / e in volt, by the exact SI constants (13: BIPM, SI brochure, 2019). */
const VT_300 = 0.025851999786435532;

type Numbers = { readonly [key: string]: number };

const plain = (value: number): string => String(value);

function led(designator: string, nodes: string, { Is, n, rs }: { Is: number; n: number; rs: number }): string {
  return `${designator}: { led: { law: exponential, saturation_current: ${plain(Is)} A, slope_voltage: ${plain(n * VT_300)} V, series_resistance: ${rs} Ω }, nodes: ${nodes} }`;
}

function diode(designator: string, nodes: string, Is: number, slope: number): string {
  return `${designator}: { diode: { law: exponential, saturation_current: ${plain(Is)} A, slope_voltage: ${plain(slope)} V }, nodes: ${nodes} }`;
}

function threshold(designator: string, nodes: string, forward: number, kind = 'led'): string {
  return `${designator}: { ${kind}: { law: threshold, forward_voltage: ${plain(forward)} V }, nodes: ${nodes} }`;
}

const sine = (peak: number, frequency: number): string =>
  `sine: { peak: ${plain(peak)} V, frequency: ${plain(frequency)} Hz }`;
const triangle = (peak: number, frequency: number): string =>
  `triangle: { low: -${plain(peak)} V, high: ${plain(peak)} V, frequency: ${plain(frequency)} Hz }`;
const ramp = (peak: number, frequency: number, fall: number): string =>
  `ramp: { low: 0 V, high: ${plain(peak)} V, frequency: ${plain(frequency)} Hz, fall: ${plain(100 * fall)} % }`;
const source = (wave: string, nodes = '[line, gnd]'): string => `G1: { source: { ${wave} }, nodes: ${nodes} }`;
const resistor = (designator: string, nodes: string, ohm: number): string =>
  `${designator}: { resistor: ${plain(ohm)} Ω, nodes: ${nodes} }`;
const capacitor = (designator: string, nodes: string, farad: number): string =>
  `${designator}: { capacitor: ${plain(farad)} F, nodes: ${nodes} }`;
const inductor = (designator: string, nodes: string, henry: number): string =>
  `${designator}: { inductor: ${plain(henry)} H, nodes: ${nodes} }`;

const STEADY = 'find: steady state';
const response = (until: number, start = 'rest', from = 0): string =>
  `find: time response\nuntil: ${plain(until)} s\nfrom: ${plain(from)} s\nstart: ${start}`;

function diodeAndResistor(): NoteCase[] {
  const { cases } = reference('04-diode-and-resistor') as {
    cases: { tag: string; V: number; R: number; Is: number; n: number; Vt: number; I: number }[];
  };
  return cases.map(({ tag, V, R, Is, n, Vt, I }) => ({
    name: `04 ${tag}`,
    components: [
      source(`sum: [${plain(V)} V]`).replace(/\{ sum: \[(.*?)\] \}/, '$1'),
      resistor('R1', '[line, a]', R),
      diode('D1', '[a, gnd]', Is, n * Vt),
    ],
    analysis: 'find: operating point',
    figures: { current: { is: 'D1.i', reference: I } },
    // the values are printed to 16 digits; the reverse case is the saturation current
    known: 1e-10,
  }));
}

function linear(): NoteCase[] {
  const values = reference('05-linear-responses') as { [key: string]: { [key: string]: Numbers } };
  const at = (expression: string, table: Numbers, scale: number): NoteCase['figures'] =>
    Object.fromEntries(
      Object.entries(table).map(([time, value], k) => [
        `${expression.replace('.', '_')}_${k}`,
        { is: `at(${expression}, ${Number(time)} s)`, reference: value, scale },
      ]),
    );
  const rlc = (ohm: number, key: string): NoteCase => ({
    name: `05 RLC ${ohm} Ω`,
    components: [
      'G1: { source: 10 V, nodes: [line, gnd] }',
      resistor('R1', '[line, a]', ohm),
      inductor('L1', '[a, b]', 1e-3),
      capacitor('C1', '[b, gnd]', 100e-9),
    ],
    analysis: response(1e-4),
    figures: { ...at('C1.v', values[key]!.vC!, 10), ...at('L1.i', values[key]!.i!, 0.05) },
  });
  return [
    {
      name: '05 RC step',
      components: [
        'G1: { source: 5 V, nodes: [line, gnd] }',
        resistor('R1', '[line, a]', 1000),
        capacitor('C1', '[a, gnd]', 1e-6),
      ],
      analysis: response(5e-3),
      figures: at('C1.v', values.rc_step_1k_1u_5V!.v!, 5),
    },
    {
      name: '05 RL step',
      components: [
        'G1: { source: 12 V, nodes: [line, gnd] }',
        resistor('R1', '[line, a]', 10),
        inductor('L1', '[a, gnd]', 50e-3),
      ],
      analysis: response(25e-3),
      figures: at('L1.i', values.rl_step_10R_50mH_12V!.i!, 1.2),
    },
    {
      name: '05 RC sine',
      components: [source(sine(10, 200)), resistor('R1', '[line, a]', 1000), capacitor('C1', '[a, gnd]', 1e-6)],
      analysis: response(10e-3),
      figures: at('C1.v', values.rc_sine_1k_1u_10V_200Hz_from_rest!.v!, 6.2),
    },
    rlc(20, 'rlc_step_under_20R_1mH_100nF_10V'),
  ];
}

interface ThresholdCase {
  C: number;
  V1: number;
  V2: number;
  Vp: number;
  f: number;
  R?: number;
  Vth?: number;
  rise_fraction?: number;
  results: { [key: string]: Numbers };
}

function thresholdPair(): NoteCase[] {
  const all = reference('09-capacitor-and-threshold-pair') as { [key: string]: ThresholdCase };
  return ['T1', 'T2', 'T3_low_drive'].flatMap((key): NoteCase[] => {
    const { C, V1, V2, Vp, f, results } = all[key]!;
    const components = (wave: string): string[] => [
      source(wave),
      capacitor('C1', '[line, lamp]', C),
      threshold('D1', '[lamp, gnd]', V1),
      threshold('D2', '[gnd, lamp]', V2),
    ];
    const figures = (name: string): NoteCase['figures'] => ({
      charge: { is: 'integral(D1.i)', reference: results[name]!.Q_half_C! },
      other_charge: { is: 'integral(D2.i)', reference: results[name]!.Q_half_C! },
      rms_total: { is: 'rms(C1.i)', reference: results[name]!.rms_total_A! },
      rms_each: { is: 'rms(D1.i)', reference: results[name]!.rms_each_LED_A! },
      peak_current: { is: 'max(D1.i)', reference: results[name]!.peak_A! },
    });
    return [
      { name: `09 ${key} sine`, components: components(sine(Vp, f)), analysis: STEADY, figures: figures('sine') },
      {
        name: `09 ${key} triangle`,
        components: components(triangle(Vp, f)),
        analysis: STEADY,
        figures: figures('triangle'),
      },
    ];
  });
}

interface ExponentialSet {
  C: number;
  R: number;
  Vp: number;
  f: number;
  led_1: { Is: number; n: number; rs: number };
  led_2: { Is: number; n: number; rs: number };
}

function exponentialPair(): NoteCase[] {
  const all = reference('10-capacitor-and-exponential-pair') as {
    sets: { [key: string]: ExponentialSet };
    cases: {
      [key: string]: { periodic: { vC_at: Numbers; charge: number; mean: number; rms: number; peak_1: number } };
    };
  };
  return Object.entries(all.cases).map(([key, { periodic }]): NoteCase => {
    const [set, drive] = key.split('/') as [string, string];
    const { C, R, Vp, f, led_1, led_2 } = all.sets[set]!;
    const wave = drive === 'sine' ? sine(Vp, f) : drive === 'triangle' ? triangle(Vp, f) : ramp(Vp, f, 0.1);
    const inner = R > 0 ? 'a' : 'line';
    return {
      name: `10 ${key}`,
      components: [
        source(wave),
        ...(R > 0 ? [resistor('R1', '[line, a]', R)] : []),
        capacitor('C1', `[${inner}, lamp]`, C),
        led('D1', '[lamp, gnd]', led_1),
        led('D2', '[gnd, lamp]', led_2),
      ],
      analysis: STEADY,
      figures: {
        charge: { is: 'integral(positive(D1.i))', reference: periodic.charge },
        mean_current: { is: 'mean(D1.i)', reference: periodic.mean },
        rms_total: { is: 'rms(C1.i)', reference: periodic.rms },
        start_voltage: { is: 'at(C1.v, 0 s)', reference: periodic.vC_at['0 T']!, scale: Vp },
        middle_voltage: { is: `at(C1.v, ${plain(0.5 / f)} s)`, reference: periodic.vC_at['0.5 T']!, scale: Vp },
        peak_current: { is: 'max(D1.i)', reference: periodic.peak_1 },
      },
      // peaks are known to about 1e-9
      known: 1e-9,
    };
  });
}

interface Rectifier {
  Vp: number;
  f: number;
  R: number;
  C: number;
  full_wave: boolean;
  [key: string]: number | boolean;
}

function rectifiers(): NoteCase[] {
  const { ideal } = reference('06-rectifiers') as { ideal: { [key: string]: Rectifier } };
  return Object.entries(ideal).map(([key, value]): NoteCase => {
    const components = value.full_wave
      ? [
          source(sine(value.Vp, value.f), '[s, t]'),
          threshold('D1', '[s, out]', 0, 'diode'),
          threshold('D2', '[t, out]', 0, 'diode'),
          threshold('D3', '[gnd, s]', 0, 'diode'),
          threshold('D4', '[gnd, t]', 0, 'diode'),
        ]
      : [source(sine(value.Vp, value.f)), threshold('D1', '[line, out]', 0, 'diode')];
    return {
      name: `06 ${key}`,
      components: [...components, capacitor('C1', '[out, gnd]', value.C), resistor('R1', '[out, gnd]', value.R)],
      analysis: STEADY,
      figures: {
        mean_voltage: { is: 'mean(out)', reference: value.mean_V as number },
        least_voltage: { is: 'min(out)', reference: value.Vmin as number },
        ripple: { is: 'span(out)', reference: value.ripple_pp as number, scale: value.Vp },
        rms_voltage: { is: 'rms(out)', reference: value.rms_V as number },
      },
    };
  });
}

/** Ideal diodes behind a source resistance, normalised: 1 V peak, 50 Hz, 1 kΩ load. */
function rectifiersWithSourceResistance(): NoteCase[] {
  const { source_resistance } = reference('06-rectifiers') as {
    source_resistance: { [key: string]: number | boolean }[];
  };
  return source_resistance.map((value): NoteCase => {
    const load = 1000;
    const ohm = (value.Rs_over_R as number) * load;
    const farad = (value.wCR as number) / (2 * Math.PI * 50 * load);
    const components = value.full_wave
      ? [
          source(sine(1, 50), '[s, t]'),
          resistor('RS', '[s, a]', ohm),
          threshold('D1', '[a, out]', 0, 'diode'),
          threshold('D2', '[t, out]', 0, 'diode'),
          threshold('D3', '[gnd, a]', 0, 'diode'),
          threshold('D4', '[gnd, t]', 0, 'diode'),
        ]
      : [source(sine(1, 50)), resistor('RS', '[line, a]', ohm), threshold('D1', '[a, out]', 0, 'diode')];
    return {
      name: `06 ${value.full_wave ? 'full' : 'half'} wave, ωCR ${value.wCR}, Rs/R ${value.Rs_over_R}`,
      components: [...components, capacitor('C1', '[out, gnd]', farad), resistor('R1', '[out, gnd]', load)],
      analysis: STEADY,
      figures: {
        mean_voltage: { is: 'mean(out)', reference: value.mean_over_Vp as number },
        rectified_rms: {
          is: 'rms(RS.i) / mean(abs(RS.i))',
          reference: value.rms_over_mean_rectified_current as number,
        },
        rectified_peak: {
          is: 'peak(RS.i) / mean(abs(RS.i))',
          reference: value.peak_over_mean_rectified_current as number,
        },
      },
    };
  });
}

/** Exponential diodes behind a source resistance. */
function exponentialRectifiers(): NoteCase[] {
  const { exponential } = reference('06-rectifiers') as {
    exponential: { [key: string]: { [key: string]: number | boolean | Numbers } & { results: Numbers } };
  };
  return Object.entries(exponential).map(([key, value]): NoteCase => {
    const slope = (value.n as number) * VT_300;
    const saturation = value.Is as number;
    const wave = sine(value.Vp as number, value.f as number);
    const components = value.full_wave
      ? [
          source(wave, '[s, t]'),
          resistor('RS', '[s, a]', value.Rs as number),
          diode('D1', '[a, out]', saturation, slope),
          diode('D2', '[t, out]', saturation, slope),
          diode('D3', '[gnd, a]', saturation, slope),
          diode('D4', '[gnd, t]', saturation, slope),
        ]
      : [source(wave), resistor('RS', '[line, a]', value.Rs as number), diode('D1', '[a, out]', saturation, slope)];
    const load = (value.R ?? value.RL ?? value.R_load) as number;
    return {
      name: `06 ${key}`,
      components: [...components, capacitor('C1', '[out, gnd]', value.C as number), resistor('R1', '[out, gnd]', load)],
      analysis: STEADY,
      figures: {
        mean_voltage: { is: 'mean(out)', reference: value.results.mean_V! },
        rms_voltage: { is: 'rms(out)', reference: value.results.rms_V! },
      },
      // the bridge's reference leaves out the leakage of the two diodes that are off, some nanoamperes
      known: 2e-8,
    };
  });
}

function operatingPoints(): NoteCase[] {
  const values = reference('11-operating-points') as { [key: string]: { [key: string]: number | Numbers } };
  const zener = values['zener_6.8V_5mA_20ohm_supply_500ohm'] as unknown as { [key: string]: Numbers };
  const regulator = (supply: number, load: number | undefined, key: string): NoteCase => ({
    name: `11 Zener ${key}`,
    components: [
      `G1: { source: ${supply} V, nodes: [line, gnd] }`,
      resistor('R1', '[line, out]', 500),
      'Z1: { zener: { law: threshold, forward_voltage: 0.7 V, breakdown_voltage: 6.7 V, breakdown_resistance: 20 Ω }, nodes: [gnd, out] }',
      ...(load === undefined ? [] : [resistor('R2', '[out, gnd]', load)]),
    ],
    analysis: 'find: operating point',
    figures: {
      output: { is: 'out', reference: zener[key]!.Vo! },
      current: { is: '-Z1.i', reference: zener[key]!.Iz!, scale: 1e-3 },
    },
    // printed to 13 digits
    known: 1e-10,
  });
  const slope = 1.5 * VT_300;
  return [
    regulator(10, undefined, '10V no load'),
    regulator(11, undefined, '11V no load'),
    regulator(9, undefined, '9V no load'),
    regulator(10, 2000, '10V RL=2k'),
    regulator(10, 500, '10V RL=500'),
    {
      name: '11 antiparallel diodes',
      components: [
        'G1: { source: 5 V, nodes: [line, gnd] }',
        resistor('R1', '[line, a]', 1000),
        diode('D1', '[a, gnd]', 1e-12, slope),
        diode('D2', '[gnd, a]', 1e-12, slope),
      ],
      analysis: 'find: operating point',
      figures: {
        voltage: { is: 'a', reference: values['antiparallel_1e-12A_n1.5_5V_1k']!.v as number },
        current: { is: 'R1.i', reference: values['antiparallel_1e-12A_n1.5_5V_1k']!.i as number },
      },
      known: 1e-10,
    },
  ];
}

function amplifier(): NoteCase {
  const { end } = reference('01-transistor-amplifier') as { end: number[] };
  const transistor = (k: number, base: string, emitter: string, collector: string): string[] => [
    diode(`D${k}`, `[${base}, ${emitter}]`, 1e-6, 0.026),
    `F${k}: { controlled-source: { gain: 0.99, sensing: D${k} }, nodes: [${collector}, ${base}] }`,
  ];
  return {
    name: '01 transistor amplifier',
    components: [
      'G2: { source: 6 V, nodes: [ub, gnd] }',
      'G1: { source: { sine: { peak: 0.1 V, frequency: 100 Hz } }, nodes: [in, gnd] }',
      resistor('R0', '[in, n1]', 1000),
      capacitor('C1', '[n1, n2]', 1e-6),
      resistor('R1', '[n2, gnd]', 9000),
      resistor('R2', '[ub, n2]', 9000),
      ...transistor(1, 'n2', 'n3', 'n4'),
      resistor('R3', '[n3, gnd]', 9000),
      capacitor('C2', '[n3, gnd]', 2e-6),
      resistor('R4', '[ub, n4]', 9000),
      capacitor('C3', '[n4, n5]', 3e-6),
      resistor('R5', '[n5, gnd]', 9000),
      resistor('R6', '[ub, n5]', 9000),
      ...transistor(2, 'n5', 'n6', 'n7'),
      resistor('R7', '[n6, gnd]', 9000),
      capacitor('C4', '[n6, gnd]', 4e-6),
      resistor('R8', '[ub, n7]', 9000),
      capacitor('C5', '[n7, n8]', 5e-6),
      resistor('R9', '[n8, gnd]', 9000),
    ],
    analysis: response(0.2, '{ C1: -3 V, C2: 3 V, C3: 3 V, C4: 3 V, C5: 6 V }'),
    figures: Object.fromEntries(
      end.map((value, k) => [
        `y${k + 1}`,
        { is: `at(n${k + 1}, 0.2 s)`, reference: value, scale: Math.max(Math.abs(value), 0.1) },
      ]),
    ),
  };
}

export const PROBLEMS: readonly NoteCase[] = [
  amplifier(),
  ...diodeAndResistor(),
  ...linear(),
  ...rectifiers(),
  ...rectifiersWithSourceResistance(),
  ...exponentialRectifiers(),
  ...thresholdPair(),
  ...exponentialPair(),
  ...operatingPoints(),
];
