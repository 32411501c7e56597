import { describe, expect, test } from 'vitest';
import { NoSolution } from '../../solver/analysis.ts';
import type { Component } from '../../solver/circuit.ts';
import {
  capacitor,
  circuit,
  constant,
  controlled,
  currentSource,
  curve,
  diode,
  expectAudit,
  expectNear,
  exponential,
  inductor,
  number,
  operatingPoint,
  reference,
  resistor,
  sine,
  source,
  threshold,
  timeSwitch,
  VT_300,
  voltageSwitch,
} from './circuits.ts';

const linear = reference('05-linear-responses');
const points = reference('11-operating-points');

/** The refusal that the circuit meets. */
function refusal(...components: Component[]): NoSolution {
  try {
    operatingPoint(circuit(...components));
  } catch (error) {
    if (error instanceof NoSolution) return error;
    throw error;
  }
  throw new Error('a solution was found');
}

describe('resistive networks (closed forms, test/references/05)', () => {
  test.each([
    ['body_diagonal', 7],
    ['face_diagonal', 3],
    ['edge', 1],
  ] as const)('cube of twelve resistors, %s', (name, opposite) => {
    const edges: Component[] = [];
    const corner = (k: number): string => (k === 0 ? 'gnd' : `n${k}`);
    for (let a = 0; a < 8; a++)
      for (const bit of [1, 2, 4]) if (!(a & bit)) edges.push(resistor(`R${a}${bit}`, corner(a), corner(a | bit), 1));
    const solution = operatingPoint(circuit(currentSource('G1', 'gnd', corner(opposite), 1), ...edges));
    expectNear(number(solution, corner(opposite)), linear.cube_of_1_ohm[name], 1e-13);
    expectAudit(solution, 1e-13);
  });

  test.each([1, 2, 3, 5, 10])('ladder of %d sections: ratios of Fibonacci numbers', (sections) => {
    const parts: Component[] = [source('G1', 'n0', 'gnd', 1)];
    for (let k = 0; k < sections; k++) {
      parts.push(resistor(`RA${k}`, `n${k}`, `n${k + 1}`, 1), resistor(`RB${k}`, `n${k + 1}`, 'gnd', 1));
    }
    const solution = operatingPoint(circuit(...parts));
    expectNear(-1 / number(solution, 'G1.i'), linear.ladder_of_1_ohm_series_then_shunt[sections], 1e-13);
  });

  test('bridge', () => {
    const { va, vb, i5 } = linear.bridge_10V_100_200_300_400_50;
    const solution = operatingPoint(
      circuit(
        source('G1', 'top', 'gnd', 10),
        resistor('R1', 'top', 'a', 100),
        resistor('R2', 'a', 'gnd', 200),
        resistor('R3', 'top', 'b', 300),
        resistor('R4', 'b', 'gnd', 400),
        resistor('R5', 'a', 'b', 50),
      ),
    );
    expectNear(number(solution, 'a'), va, 1e-13);
    expectNear(number(solution, 'b'), vb, 1e-13);
    expectNear(number(solution, 'R5.i'), i5, 1e-12);
    // a source that delivers takes in negative power (passive sign convention)
    expectNear(number(solution, 'G1.p'), 10 * number(solution, 'G1.i'), 1e-15);
    expect(number(solution, 'G1.i')).toBeLessThan(0);
  });

  test('inductors are short circuits, capacitors open; temperature moves a resistor', () => {
    const parts = [
      source('G1', 'in', 'gnd', 10),
      { ...resistor('R1', 'in', 'a', 100), temperatureCoefficient: 4e-3 },
      inductor('L1', 'a', 'b', 1e-3),
      resistor('R2', 'b', 'gnd', 100),
      capacitor('C1', 'b', 'gnd', 1e-6),
    ];
    const solution = operatingPoint({ ...circuit(...parts), temperature: 298.15 + 50 });
    // 120 Ω and 100 Ω in series
    expectNear(number(solution, 'L1.i'), 10 / 220, 1e-14);
    expectNear(number(solution, 'C1.q'), (1e-6 * 1000) / 220, 1e-13);
    expect(number(solution, 'C1.i')).toBe(0);
    expect(number(solution, 'L1.v')).toBe(0);
  });

  test('the four controlled sources (hand calculation)', () => {
    const solution = operatingPoint(
      circuit(
        source('G1', 'in', 'gnd', 2),
        resistor('R1', 'in', 'gnd', 1e3),
        // 3 times 2 V
        controlled('A1', 'a', 'gnd', 'voltage', ['in', 'gnd'], 3),
        resistor('R2', 'a', 'gnd', 1e3),
        // 2 V times 1 mS leave node b: -2 V on 1 kΩ
        controlled('A2', 'b', 'gnd', 'current', ['in', 'gnd'], 1e-3),
        resistor('R3', 'b', 'gnd', 1e3),
        // 2 mA times 500 Ω
        controlled('A3', 'c', 'gnd', 'voltage', 'R1', 500),
        resistor('R4', 'c', 'gnd', 1e3),
        // 10 times the current into the source's first node, -2 mA
        controlled('A4', 'd', 'gnd', 'current', 'G1', 10),
        resistor('R5', 'd', 'gnd', 1e3),
      ),
    );
    const found = ['a', 'b', 'c', 'd', 'R1.i', 'G1.i', 'A4.i', 'A1.i'].map((name) => number(solution, name));
    const expected = [6, -2, 1, 20, 2e-3, -2e-3, -20e-3, -6e-3];
    found.forEach((value, k) => {
      expectNear(value, expected[k]!, 1e-13);
    });
    expectAudit(solution, 1e-13);
  });

  test('sources take their value at the start: a sine its first value', () => {
    const solution = operatingPoint(
      circuit(source('G1', 'in', 'gnd', sine(10, 50, { phase: Math.PI / 6 })), resistor('R1', 'in', 'gnd', 1e3)),
    );
    expectNear(number(solution, 'R1.v'), 5, 1e-14);
  });
});

describe('exponential diodes (test/references/11)', () => {
  test('antiparallel pair', () => {
    const { v, i } = points['antiparallel_1e-12A_n1.5_5V_1k'];
    const law = exponential(1e-12, 1.5 * VT_300);
    for (const sign of [1, -1]) {
      const solution = operatingPoint(
        circuit(
          source('G1', 'in', 'gnd', sign * 5),
          resistor('R1', 'in', 'a', 1e3),
          diode('D1', 'a', 'gnd', law),
          diode('D2', 'gnd', 'a', law),
        ),
      );
      expectNear(number(solution, 'a'), sign * v, 1e-12);
      expectNear(number(solution, 'R1.i'), sign * i, 1e-12);
      expectAudit(solution, 1e-12);
    }
  });

  const bridgeLaw = exponential(2e-9, 1.8 * VT_300);
  const bridge = (drive: number): Component[] => [
    source('G1', 'a', 'gnd', drive),
    // the reference stands on the source: the load floats
    diode('D1', 'a', 'p', bridgeLaw),
    diode('D2', 'gnd', 'p', bridgeLaw),
    diode('D3', 'n', 'a', bridgeLaw),
    diode('D4', 'n', 'gnd', bridgeLaw),
    resistor('R1', 'p', 'n', 1e3),
  ];
  test.each([10, -10])('four-diode bridge at %d V', (drive) => {
    const { Vload, I } = points['bridge_2e-9A_n1.8_10V_1k'];
    const solution = operatingPoint(circuit(...bridge(drive)));
    expectNear(number(solution, 'R1.v'), Vload, 1e-12);
    expectNear(number(solution, 'R1.i'), I, 1e-12);
    expectAudit(solution, 1e-12);
  });

  test('two-junction transistor from diodes and controlled sources, active and saturated', () => {
    // J. J. Ebers and J. L. Moll, 1954, transport form: the collector takes Is (e^be - e^bc) less the base's share of the collector junction
    const build = (rows: [number, number, number, number], forward: number, reverse: number): Component[] => {
      const [upper, lower, collector, emitter] = rows;
      const law = (gain: number) => exponential(1e-14 / gain, VT_300);
      return [
        source('G1', 'cc', 'gnd', 12),
        resistor('R1', 'cc', 'b', upper),
        resistor('R2', 'b', 'gnd', lower),
        resistor('RC', 'cc', 'c', collector),
        resistor('RE', 'e', 'gnd', emitter),
        diode('BE', 'b', 'e', law(forward)),
        diode('BC', 'b', 'c', law(reverse)),
        controlled('F', 'c', 'e', 'current', 'BE', forward),
        controlled('B', 'e', 'c', 'current', 'BC', reverse),
      ];
    };
    for (const [rows, reverse, name] of [
      [[47e3, 10e3, 2.2e3, 1e3], 1, 'bipolar_active'],
      [[22e3, 10e3, 4.7e3, 1e3], 2, 'bipolar_saturated'],
    ] as const) {
      const solution = operatingPoint(circuit(...build([...rows], 100, reverse)));
      const { VB, VC, VE, IC, IE } = points[name];
      for (const [found, expected] of [
        ['b', VB],
        ['c', VC],
        ['e', VE],
      ] as const)
        expectNear(number(solution, found), expected, 1e-11, found);
      expectNear(number(solution, 'RC.i'), IC, 1e-11);
      expectNear(number(solution, 'RE.i'), IE, 1e-11);
    }
  });

  test('saturated switch', () => {
    const { VBE, VCEsat } = points.bipolar_switch;
    const solution = operatingPoint(
      circuit(
        source('G1', 'cc', 'gnd', 5),
        resistor('RC', 'cc', 'c', 1e3),
        resistor('RB', 'cc', 'b', 10e3),
        diode('BE', 'b', 'gnd', exponential(1e-16, VT_300)),
        diode('BC', 'b', 'c', exponential(1e-14, VT_300)),
        controlled('F', 'c', 'gnd', 'current', 'BE', 100),
        controlled('B', 'gnd', 'c', 'current', 'BC', 1),
      ),
    );
    expectNear(number(solution, 'b'), VBE, 1e-11);
    expectNear(number(solution, 'c'), VCEsat, 1e-10);
  });
});

describe('Zener regulator 6.8 V at 5 mA, 20 Ω (test/references/11)', () => {
  const cases = points['zener_6.8V_5mA_20ohm_supply_500ohm'];
  const supply = (volts: number, load: number | undefined, zener: Component): Component[] => [
    source('G1', 'in', 'gnd', volts),
    resistor('R1', 'in', 'out', 500),
    zener,
    ...(load ? [resistor('R2', 'out', 'gnd', load)] : []),
  ];
  const rows = [
    ['10V no load', 10, undefined],
    ['11V no load', 11, undefined],
    ['9V no load', 9, undefined],
    ['10V RL=2k', 10, 2000],
    ['10V RL=500', 10, 500],
  ] as const;

  test.each(rows)('threshold law, %s: exact', (name, volts, load) => {
    const law = threshold(0.7, 0, { voltage: 6.7, resistance: 20 });
    const solution = operatingPoint(circuit(...supply(volts, load, diode('Z1', 'gnd', 'out', law))));
    expectNear(number(solution, 'out'), cases[name].Vo, 1e-12);
    expect(Math.abs(-number(solution, 'Z1.i') - cases[name].Iz)).toBeLessThan(1e-14);
  });

  test.each(rows.slice(0, 4))('exponential breakdown through the same point, %s: near', (name, volts, load) => {
    // most of the 20 Ω ohmic: 2 mV / 5 mA = 0.4 Ω are not, and bend the line by some 2 mV ln(I / 5 mA)
    const law = exponential(1e-14, VT_300, 0, {
      breakdown: { voltage: 6.8, current: 5e-3, resistance: 19.6, slopeVoltage: 2e-3 },
    });
    const solution = operatingPoint(circuit(...supply(volts, load, diode('Z1', 'gnd', 'out', law))));
    expect(Math.abs(number(solution, 'out') - cases[name].Vo)).toBeLessThan(1e-3);
    const iz = -number(solution, 'Z1.i');
    // its own law, solved for the voltage: V = 6.8 - 19.6 · 5 mA + 2 mV ln(I / 5 mA) + 19.6 I
    expectNear(number(solution, 'out'), 6.8 + 19.6 * (iz - 5e-3) + 2e-3 * Math.log(iz / 5e-3), 1e-9);
  });
});

describe('cubic resistor i = 1 mA ((v-1)(v-2)(v-3) + 1.5) from 17 V through 10 kΩ', () => {
  const [low, middle, high]: [number, number, number] = points.cubic_resistor_17V_10k;
  const law = (v: number): number => 1e-3 * ((v - 1) * (v - 2) * (v - 3) + 1.5);
  const table = (step: number): [number[], number[]] => {
    const v = Array.from({ length: Math.round(4 / step) + 1 }, (_, k) => k * step);
    return [v, v.map(law)];
  };

  test('one of the three operating points is found, within the accuracy of the table', () => {
    const [v, i] = table(0.01);
    const solution = operatingPoint(
      circuit(source('G1', 'in', 'gnd', 17), resistor('R1', 'in', 'a', 10e3), curve('X1', 'a', 'gnd', v, i)),
    );
    const found = number(solution, 'a');
    const nearest = Math.min(...[low, middle, high].map((root) => Math.abs(root - found)));
    expect(nearest).toBeLessThan(1e-4);
    expectAudit(solution, 1e-10);
  });

  test('where a capacitor decides, the stable ones (the middle one is unstable)', async () => {
    const { timeResponse, at } = await import('./circuits.ts');
    const [v, i] = table(0.01);
    for (const [start, root] of [
      [1.9, low],
      [2.1, high],
    ] as const) {
      const solution = timeResponse(
        circuit(
          source('G1', 'in', 'gnd', constant(17)),
          resistor('R1', 'in', 'a', 10e3),
          curve('X1', 'a', 'gnd', v, i),
          capacitor('C1', 'a', 'gnd', 1e-6),
        ),
        0.05,
        1e-6,
        { C1: start },
      );
      expect(Math.abs(at(solution, 'a', 0.05) - root)).toBeLessThan(1e-4);
    }
  });
});

describe('fallbacks', () => {
  test('a chain of diodes without resistance on a stiff source, and its remark where one was needed', () => {
    // ten equal diodes share the voltage: I = Is (exp(V / 10 / slope) - 1)
    const parts: Component[] = [source('G1', 'n0', 'gnd', 7)];
    for (let k = 0; k < 10; k++)
      parts.push(diode(`D${k}`, `n${k}`, k === 9 ? 'gnd' : `n${k + 1}`, exponential(1e-14, VT_300)));
    const solution = operatingPoint(circuit(...parts));
    expectNear(number(solution, 'D0.i'), 1e-14 * Math.expm1(0.7 / VT_300), 1e-9);
  });

  /** 1 mA/V and a fading ripple on it: Newton's method jumps from hill to hill. */
  const hilly = (designator: string, a: string, b: string, height: number, waves: number): Component => {
    const v = Array.from({ length: 161 }, (_, k) => Math.round(-80 + k) / 10);
    const law = (u: number): number => 1e-3 * (u + height * Math.sin(waves * u) * Math.exp((-u * u) / 20));
    return curve(designator, a, b, v, v.map(law));
  };
  const cases: readonly [method: string, remark: RegExp, parts: readonly Component[]][] = [
    [
      'damping',
      /damped/,
      [source('G1', 'in', 'gnd', 2.26), resistor('R1', 'in', 'a', 204), hilly('X1', 'a', 'gnd', 2.2, 4)],
    ],
    [
      'a shunt',
      /shunt/,
      [source('G1', 'in', 'gnd', 11.69), resistor('R1', 'in', 'a', 1790), hilly('X1', 'a', 'gnd', 2.1, 9)],
    ],
    [
      'sources stepped up',
      /stepped up/,
      [
        source('G1', 'in', 'gnd', 8.504961967468262),
        resistor('R1', 'in', 'a', 7708.684924088683),
        hilly('X1', 'a', 'b', 2.7, 7.5),
        resistor('R2', 'a', 'gnd', 22548.72530420726),
        controlled('A1', 'a', 'gnd', 'current', ['b', 'in'], 0.0024229706533889367),
        hilly('X2', 'b', 'gnd', 1.8, 8.5),
        controlled('A2', 'b', 'gnd', 'current', ['a', 'in'], 0.0002306869582733726),
      ],
    ],
  ];
  test.each(cases)('%s: solved, and the reader is told', (_, remark, parts) => {
    const solution = operatingPoint(circuit(...parts));
    expectAudit(solution, 1e-9);
    expect(solution.remarks).toHaveLength(1);
    expect(solution.remarks[0]).toMatch(remark);
  });

  test('a falling characteristic that outweighs its resistor has no operating point, and is not given one', () => {
    // its current is nowhere below zero, the resistor's is below zero from -4 V up, and below -4 V it falls more steeply
    const { details } = refusal(
      source('G1', 'in', 'gnd', -4),
      resistor('R1', 'in', 'a', 100),
      curve('X1', 'a', 'gnd', [-1, 0, 1], [40e-3, 0, 40e-3]),
    );
    expect(details.reason).toMatch(/'a'/);
  });
});

describe('floating islands: the charge decides', () => {
  test('capacitors in series share the voltage inversely to their size', () => {
    const solution = operatingPoint(
      circuit(source('G1', 'in', 'gnd', 9), capacitor('C1', 'in', 'a', 1e-6), capacitor('C2', 'a', 'gnd', 2e-6)),
    );
    // equal charges: 9 V · (1 ∥ 2) µF = 6 µC
    expectNear(number(solution, 'C1.v'), 6, 1e-13);
    expectNear(number(solution, 'C2.q') - number(solution, 'C1.q'), 0, 1e-19);
    expect(solution.remarks.join()).toMatch(/\ba\b.*uncharged/);
  });

  test('an island of several nodes with resistors inside', () => {
    const solution = operatingPoint(
      circuit(
        source('G1', 'in', 'gnd', 10),
        capacitor('C1', 'in', 'a', 1e-6),
        resistor('R1', 'a', 'b', 1e3),
        capacitor('C2', 'b', 'gnd', 3e-6),
        capacitor('C3', 'a', 'gnd', 1e-6),
      ),
    );
    // one potential v: 1 (v - 10) + 3 v + 1 v = 0
    expectNear(number(solution, 'a'), 2, 1e-13);
    expectNear(number(solution, 'b'), 2, 1e-13);
    expectNear(number(solution, 'R1.i') + 1, 1, 1e-15);
  });
});

describe('no solution', () => {
  test('two sources that contradict each other', () => {
    const { details } = refusal(
      source('G1', 'a', 'b', 1),
      source('G2', 'a', 'b', 2),
      resistor('R1', 'a', 'gnd', 1),
      resistor('R2', 'b', 'gnd', 1),
    );
    expect(details.analysis).toBe('operating point');
    expect(details.reason).toMatch(/G[12]/);
    expect(details.advice).not.toBe('');
  });

  test('a source of current into an open switch and nothing else is held by the leak or refused, never undefined', () => {
    try {
      const solution = operatingPoint(circuit(currentSource('G1', 'gnd', 'a', 1e-3), timeSwitch('S1', 'a', 'gnd', [])));
      expect(Number.isFinite(number(solution, 'a'))).toBe(true);
    } catch (error) {
      expect(error).toBeInstanceOf(NoSolution);
      expect((error as NoSolution).details.reason).toMatch(/'a'|S1/);
    }
  });

  test('a node that nothing holds is named', () => {
    const { details } = refusal(
      source('G1', 'in', 'gnd', 1),
      resistor('R1', 'in', 'gnd', 1),
      currentSource('G2', 'gnd', 'lost', 1e-3),
      controlled('A1', 'lost', 'gnd', 'current', ['in', 'gnd'], 1e-3),
    );
    expect(details.reason).toMatch(/lost/);
  });

  test('a loose network whose conductances sum to zero only up to rounding is refused too', () => {
    const { details } = refusal(
      source('G1', 'in', 'gnd', 1),
      resistor('R1', 'in', 'gnd', 1),
      resistor('R2', 'x', 'y', 3),
      resistor('R3', 'y', 'z', 7),
      resistor('R4', 'z', 'x', 11),
      controlled('A1', 'x', 'gnd', 'current', ['in', 'gnd'], 1e-3),
    );
    expect(details.reason).toMatch(/[xyz]/);
  });

  test('a contact that its own closing opens again finds no state, and the search ends', () => {
    const { details } = refusal(
      source('G1', 'in', 'gnd', 4.7),
      resistor('R1', 'in', 'a', 5600),
      voltageSwitch('S1', 'a', 'gnd', ['a', 'gnd'], 3, 1, { onResistance: 10 }),
    );
    expect(details.component).toBe('S1');
    expect(details.reason).toMatch(/S1/);
  });

  test('a positive feedback without a fixed point', () => {
    // v = 1 + v
    const { details } = refusal(
      source('G1', 'in', 'gnd', 1),
      resistor('R1', 'in', 'gnd', 1),
      controlled('A1', 'a', 'in', 'voltage', ['a', 'gnd'], 1),
      resistor('R2', 'a', 'gnd', 1),
    );
    expect(details.reason).toMatch(/a|A1/);
  });

  test('a current that a table cannot carry back: a diode fed against its direction', () => {
    const { details } = refusal(
      currentSource('G1', 'a', 'gnd', 1e-3),
      diode('D1', 'a', 'gnd', exponential(1e-14, VT_300)),
    );
    expect(details.reason).toMatch(/'a'/);
    expect(details.component).toBe('D1');
  });
});
