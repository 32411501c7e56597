/** Time responses whose closed form any textbook of circuit theory has (test/references/05; formulas beside the checks). */
import { describe, expect, test } from 'vitest';
import type { Component } from '../../solver/circuit.ts';
import { greatest, peak } from '../../solver/waveform/extremes.ts';
import { integral, rms } from '../../solver/waveform/integrals.ts';
import { riseTime } from '../../solver/waveform/transients.ts';
import { valueAt } from '../../solver/waveform/value-at.ts';
import {
  at,
  between,
  capacitor,
  circuit,
  expectAudit,
  expectNear,
  inductor,
  jump,
  quantity,
  reference,
  resistor,
  sine,
  source,
  timeResponse,
  timeSwitch,
  voltageSwitch,
} from './circuits.ts';

const linear = reference('05-linear-responses');
const accuracies = [1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8, 1e-9];

/** Largest difference of a quantity to its closed form, relative to the closed form's largest value, at 2,000 places between `from` and `until`. */
function worstError(
  solution: ReturnType<typeof timeResponse>,
  name: string,
  of: (t: number) => number,
  until: number,
): number {
  const waveform = quantity(solution, name);
  let worst = 0;
  let scale = 0;
  for (let k = 1; k <= 2000; k++) {
    const t = (k / 2000) * until;
    worst = Math.max(worst, Math.abs(valueAt(waveform, t, 'left') - of(t)));
    scale = Math.max(scale, Math.abs(of(t)));
  }
  return worst / scale;
}

const rc = (drive: Parameters<typeof source>[3]): Component[] => [
  source('G1', 'in', 'gnd', drive),
  resistor('R1', 'in', 'a', 1e3),
  capacitor('C1', 'a', 'gnd', 1e-6),
];
const rl = (): Component[] => [
  source('G1', 'in', 'gnd', 12),
  resistor('R1', 'in', 'a', 10),
  inductor('L1', 'a', 'gnd', 50e-3),
];
const rlc = (ohm: number, drive: Parameters<typeof source>[3]): Component[] => [
  source('G1', 'in', 'gnd', drive),
  resistor('R1', 'in', 'a', ohm),
  inductor('L1', 'a', 'b', 1e-3),
  capacitor('C1', 'b', 'gnd', 100e-9),
];

describe.each([1e-4, 1e-7])('reference values at accuracy %d', (accuracy) => {
  const rows = (table: Record<string, number>): [number, number][] =>
    Object.entries(table).map(([t, value]) => [Number(t), value]);

  test('RC, step of 5 V', () => {
    const { v, t_10_90 } = linear.rc_step_1k_1u_5V;
    const solution = timeResponse(circuit(...rc(5)), 10e-3, accuracy, 'rest');
    for (const [t, value] of rows(v)) expect(Math.abs(at(solution, 'C1.v', t) - value)).toBeLessThan(accuracy * 5);
    expectAudit(solution);
    // 10 % to 90 % of the final value: from the value at 10 ms, short of 5 V by e^-10
    expectNear(riseTime(quantity(solution, 'C1.v')) as number, t_10_90, 1e-3);
  });

  test('RL, step of 12 V', () => {
    const solution = timeResponse(circuit(...rl()), 0.05, accuracy, 'rest');
    for (const [t, value] of rows(linear.rl_step_10R_50mH_12V.i))
      expect(Math.abs(at(solution, 'L1.i', t) - value)).toBeLessThan(accuracy * 1.2);
    expectAudit(solution);
  });

  test('RC, sine switched on at rest', () => {
    const { v, i_rms } = linear.rc_sine_1k_1u_10V_200Hz_from_rest;
    const solution = timeResponse(circuit(...rc(sine(10, 200))), 30e-3, accuracy, 'rest', 5e-3);
    const early = timeResponse(circuit(...rc(sine(10, 200))), 10e-3, accuracy, 'rest');
    for (const [t, value] of rows(v)) expect(Math.abs(at(early, 'C1.v', t) - value)).toBeLessThan(accuracy * 6.23);
    // from 5 ms to 30 ms: five whole periods, the last of which starts 25 time constants after the start
    const current = quantity(solution, 'R1.i');
    expect(current.grid[0]).toBe(5e-3);
    const { grid, values } = current;
    const first = [...grid].findIndex((t) => t > 25e-3 - 1e-9);
    // the period need not begin on a step: the square's mean over the steps that lie within 25 ms to 30 ms is near
    const steady = rms({ grid: grid.slice(first), values: values.slice(4 * first) });
    expectNear(steady, i_rms, 0.2);
    expectAudit(solution);
  });

  test.each([
    ['under', 20],
    ['crit', 200],
    ['over', 500],
  ])('series RLC, step of 10 V, %s', (name, ohm) => {
    const { vC, i } = linear[`rlc_step_${name}_${ohm}R_1mH_100nF_10V`];
    const solution = timeResponse(circuit(...rlc(ohm, 10)), 1e-4, accuracy, 'rest');
    const scale = Math.max(...Object.values<number>(vC));
    const scaleOfCurrent = Math.max(...Object.values<number>(i).map(Math.abs));
    for (const [t, value] of rows(vC)) expect(Math.abs(at(solution, 'C1.v', t) - value)).toBeLessThan(accuracy * scale);
    for (const [t, value] of rows(i))
      expect(Math.abs(at(solution, 'L1.i', t) - value)).toBeLessThan(accuracy * scaleOfCurrent);
    if (name === 'under') {
      const { vC_peak, i_peak } = linear.rlc_step_under_20R_1mH_100nF_10V;
      expectNear(greatest(quantity(solution, 'C1.v')), vC_peak, accuracy);
      expectNear(greatest(quantity(solution, 'L1.i')), i_peak, accuracy);
    }
    expectAudit(solution);
  });

  test('series RLC, sine switched on at rest', () => {
    const { vC_i, steady_amp_vC, steady_amp_i } = linear.rlc_sine_from_rest_20R_1mH_100nF_10V_12kHz;
    const solution = timeResponse(circuit(...rlc(20, sine(10, 12e3))), 5e-4, accuracy, 'rest');
    for (const [t, [v, i]] of Object.entries<[number, number]>(vC_i)) {
      expect(Math.abs(at(solution, 'C1.v', Number(t)) - v)).toBeLessThan(accuracy * steady_amp_vC);
      expect(Math.abs(at(solution, 'L1.i', Number(t)) - i)).toBeLessThan(accuracy * steady_amp_i);
    }
    expectAudit(solution);
  });
});

describe('the error keeps the accuracy asked, at every place, and falls with it', () => {
  const responses: readonly [
    name: string,
    components: Component[],
    until: number,
    quantities: Record<string, (t: number) => number>,
  ][] = [
    ['RC step', rc(5), 5e-3, { 'C1.v': (t) => 5 * -Math.expm1(-t / 1e-3), 'C1.i': (t) => 5e-3 * Math.exp(-t / 1e-3) }],
    ['RL step', rl(), 25e-3, { 'L1.i': (t) => 1.2 * -Math.expm1(-t / 5e-3), 'L1.v': (t) => 12 * Math.exp(-t / 5e-3) }],
    [
      'RLC step, weakly damped',
      rlc(20, 10),
      3e-4,
      {
        // A = 10 V, α = R / 2L, ω² = 1 / LC - α²
        'C1.v': (t) => {
          const [alpha, w] = [1e4, Math.sqrt(1e10 - 1e8)];
          return 10 * (1 - Math.exp(-alpha * t) * (Math.cos(w * t) + (alpha / w) * Math.sin(w * t)));
        },
        'L1.i': (t) => (10 / (1e-3 * Math.sqrt(1e10 - 1e8))) * Math.exp(-1e4 * t) * Math.sin(Math.sqrt(1e10 - 1e8) * t),
      },
    ],
    [
      'RC, sine',
      rc(sine(10, 200)),
      20e-3,
      {
        'C1.v': (t) => {
          const x = 2 * Math.PI * 200 * 1e-3;
          const [a, p] = [10 / Math.hypot(1, x), Math.atan(x)];
          return a * (Math.sin(2 * Math.PI * 200 * t - p) + Math.sin(p) * Math.exp(-t / 1e-3));
        },
      },
    ],
  ];

  test.each(responses)('%s', (_, components, until, quantities) => {
    for (const [name, of] of Object.entries(quantities)) {
      const errors = accuracies.map((accuracy) =>
        worstError(timeResponse(circuit(...components), until, accuracy, 'rest'), name, of, until),
      );
      errors.forEach((error, k) => {
        // 1e-13: rounding over the steps
        expect(error, `${name} at accuracy ${accuracies[k]}`).toBeLessThan(Math.max(accuracies[k]!, 1e-13));
      });
      // over the six decades the error falls by at least five
      expect(errors[0]! / Math.max(errors[6]!, 1e-14), `${name}: ${errors}`).toBeGreaterThan(
        1e5 * Math.min(1, errors[0]! / 1e-3),
      );
    }
  });
});

describe('balances', () => {
  test('charge sharing through a resistor: the charge is kept to the last digits, the energy lost does not depend on R', () => {
    const { V_final, E_before, E_after, E_lost } = linear['charge_sharing_10u_12V_4.7u_0V'];
    for (const ohm of [1, 1e3]) {
      const solution = timeResponse(
        circuit(capacitor('C1', 'a', 'gnd', 10e-6), resistor('R1', 'a', 'b', ohm), capacitor('C2', 'b', 'gnd', 4.7e-6)),
        40 * ohm * 3.2e-6,
        1e-6,
        { C1: 12 },
      );
      const until = 40 * ohm * 3.2e-6;
      expectNear(at(solution, 'a', until), V_final, 1e-9);
      expectNear(at(solution, 'b', until), V_final, 1e-9);
      const [q1, q2] = [quantity(solution, 'C1.q'), quantity(solution, 'C2.q')];
      q1.values.forEach((q, k) => {
        expectNear(q + q2.values[k]!, 120e-6, 1e-12);
      });
      // stated starts are met by way of very short steps, over which a little charge has flowed
      expectNear(at(solution, 'C1.energy', 0, 'right'), E_before, 1e-9);
      expectNear(at(solution, 'C1.energy', until) + at(solution, 'C2.energy', until), E_after, 1e-9);
      expectNear(integral(quantity(solution, 'R1.p')), E_lost, 1e-6);
      expectAudit(solution);
    }
  });

  test('charge sharing through an ideal contact: at once, and the charge is kept', () => {
    const { V_final } = linear['charge_sharing_10u_12V_4.7u_0V'];
    const solution = timeResponse(
      circuit(
        capacitor('C1', 'a', 'gnd', 10e-6),
        timeSwitch('S1', 'a', 'b', [1e-3]),
        capacitor('C2', 'b', 'gnd', 4.7e-6),
      ),
      2e-3,
      1e-4,
      { C1: 12 },
    );
    expectNear(at(solution, 'a', 0.9e-3), 12, 1e-12);
    expectNear(at(solution, 'b', 0.9e-3) + 1, 1, 1e-12);
    expectNear(at(solution, 'a', 2e-3), V_final, 1e-12);
    expectNear(at(solution, 'b', 2e-3), V_final, 1e-12);
  });

  test('energy in an RLC circuit: what the source gives is stored or turned into heat', () => {
    for (const accuracy of [1e-4, 1e-7]) {
      const solution = timeResponse(circuit(...rlc(20, 10)), 1e-4, accuracy, 'rest');
      const given = -integral(quantity(solution, 'G1.p'));
      const heat = integral(quantity(solution, 'R1.p'));
      const stored = at(solution, 'C1.energy', 1e-4) + at(solution, 'L1.energy', 1e-4);
      expect(Math.abs(given - heat - stored) / given).toBeLessThan(accuracy);
      // the charge through the loop is the capacitor's
      expectNear(integral(quantity(solution, 'L1.i')), at(solution, 'C1.q', 1e-4), 1e-12);
    }
  });

  test('a lossless tank keeps its energy to the accuracy asked over ten cycles', () => {
    const f = 1 / (2 * Math.PI * Math.sqrt(1e-3 * 100e-9));
    for (const accuracy of [1e-4, 1e-6, 1e-8]) {
      const solution = timeResponse(
        circuit(capacitor('C1', 'a', 'gnd', 100e-9), inductor('L1', 'a', 'gnd', 1e-3)),
        10 / f,
        accuracy,
        { C1: 5 },
      );
      // v = 5 V cos(2π f t)
      expect(worstError(solution, 'C1.v', (t) => 5 * Math.cos(2 * Math.PI * f * t), 10 / f)).toBeLessThan(accuracy);
    }
  });
});

describe('a lone capacitor across a sine', () => {
  test.each([1e-4, 1e-7])('its current leads its voltage by 90°, at accuracy %d', (accuracy) => {
    const solution = timeResponse(
      circuit(source('G1', 'a', 'gnd', sine(10, 50)), capacitor('C1', 'a', 'gnd', 1e-6)),
      0.04,
      accuracy,
    );
    const current = (t: number): number => 2 * Math.PI * 50 * 1e-6 * 10 * Math.cos(2 * Math.PI * 50 * t);
    expect(worstError(solution, 'C1.i', current, 0.04)).toBeLessThan(accuracy);
    // phase by the correlation with sine and cosine over two periods: the current has no sine part
    const { grid, values } = quantity(solution, 'C1.i');
    const weighted = (of: (t: number) => number): number => {
      const nodes = [0, (4 - Math.sqrt(6)) / 10, (4 + Math.sqrt(6)) / 10, 1];
      return integral({
        grid,
        values: values.map((v, k) => v * of(grid[k >> 2]! + nodes[k % 4]! * (grid[(k >> 2) + 1]! - grid[k >> 2]!))),
      });
    };
    const inPhase = weighted((t) => Math.sin(2 * Math.PI * 50 * t));
    const ahead = weighted((t) => Math.cos(2 * Math.PI * 50 * t));
    expect(Math.abs((Math.atan2(ahead, inPhase) * 180) / Math.PI - 90)).toBeLessThan(90 * accuracy);
    expectNear(peak(quantity(solution, 'C1.i')), 2 * Math.PI * 50 * 1e-5, accuracy);
  });
});

describe('beginnings', () => {
  test('operating point: nothing moves until the source does', () => {
    const solution = timeResponse(circuit(...rc(jump(2, 7, 1e-3))), 6e-3);
    expectNear(at(solution, 'a', 0, 'right'), 2, 1e-12);
    expectNear(at(solution, 'a', 1e-3), 2, 1e-12);
    expect(Math.abs(at(solution, 'C1.i', 0.5e-3))).toBeLessThan(1e-15);
    for (const t of [1.5e-3, 3e-3, 6e-3])
      expect(Math.abs(at(solution, 'a', t) - (7 - 5 * Math.exp(-(t - 1e-3) / 1e-3)))).toBeLessThan(1e-4 * 7);
    // the current jumps with the source: 0 before, 5 V / 1 kΩ after
    expectNear(at(solution, 'C1.i', 1e-3, 'left') + 1, 1, 1e-12);
    expectNear(at(solution, 'C1.i', 1e-3, 'right'), 5e-3, 1e-3);
  });

  test('stated values of capacitors and inductors, of either direction, grounded or not', () => {
    const solution = timeResponse(
      circuit(
        resistor('R1', 'a', 'b', 100),
        capacitor('C1', 'gnd', 'a', 1e-6),
        capacitor('C2', 'b', 'c', 2e-6),
        resistor('R2', 'c', 'gnd', 50),
        inductor('L1', 'd', 'gnd', 1e-3),
        resistor('R3', 'gnd', 'd', 10),
      ),
      1e-4,
      1e-6,
      { C1: 3, C2: -4, L1: 0.5 },
    );
    expectNear(at(solution, 'C1.v', 0, 'right'), 3, 1e-9);
    expectNear(at(solution, 'C2.v', 0, 'right'), -4, 1e-9);
    expectNear(at(solution, 'L1.i', 0, 'right'), 0.5, 1e-9);
    // a = -3 V drives through R1, C2 (-4 V) and R2: i = (-3 + 4) V / 150 Ω
    expectNear(at(solution, 'R1.i', 0, 'right'), 1 / 150, 1e-6);
    expectNear(at(solution, 'L1.i', 1e-4), 0.5 * Math.exp(-1), 1e-6);
  });

  test('`from`: what came before is solved and not kept', () => {
    const whole = timeResponse(circuit(...rc(sine(10, 200))), 20e-3, 1e-6, 'rest');
    const part = timeResponse(circuit(...rc(sine(10, 200))), 20e-3, 1e-6, 'rest', 13.7e-3);
    expect(part.grid[0]).toBe(13.7e-3);
    expect(part.grid.at(-1)).toBe(20e-3);
    for (const t of [13.7e-3, 15e-3, 18.33e-3, 20e-3])
      expect(Math.abs(at(part, 'a', t, t === 13.7e-3 ? 'right' : 'left') - at(whole, 'a', t))).toBeLessThan(2e-5);
  });

  test('pulse with upright edges: every edge is met, the response is that of steps in turn', () => {
    const tau = 1e-3;
    const pulse = {
      shape: 'pulse',
      low: 0,
      high: 5,
      frequency: 250,
      width: 1e-3,
      rise: 0,
      fall: 0,
      delay: 0.5e-3,
    } as const;
    const solution = timeResponse(circuit(...rc(pulse)), 10e-3, 1e-7, 'operating point');
    const closed = (t: number): number => {
      let v = 0;
      for (let k = 0; 0.5e-3 + k * 4e-3 < t; k++) {
        for (const [edge, sign] of [
          [0.5e-3 + k * 4e-3, 1],
          [1.5e-3 + k * 4e-3, -1],
        ] as const)
          if (edge < t) v += sign * 5 * -Math.expm1(-(t - edge) / tau);
      }
      return v;
    };
    expect(worstError(solution, 'C1.v', closed, 10e-3)).toBeLessThan(1e-7);
    for (const edge of [0.5e-3, 1.5e-3, 4.5e-3, 5.5e-3, 8.5e-3, 9.5e-3]) {
      const met = solution.grid.find((t) => Math.abs(t - edge) < 1e-15)!;
      expect(Math.abs(at(solution, 'in', met, 'right') - at(solution, 'in', met, 'left'))).toBe(5);
    }
  });

  test('a pulse much shorter than the response is not stepped over', () => {
    // 1 µs of 1 kV on 1 ms: q = 1000 V / 1 kΩ · 1 µs
    const spike = {
      shape: 'pulse',
      low: 0,
      high: 1000,
      frequency: 0,
      width: 1e-6,
      rise: 0,
      fall: 0,
      delay: 0.05,
    } as const;
    const solution = timeResponse(circuit(...rc(spike)), 0.1);
    const expected = 1000 * -Math.expm1(-1e-6 / 1e-3);
    expectNear(greatest(quantity(solution, 'C1.v')), expected, 1e-4);
  });

  test('a delayed sine rests at its first value', () => {
    const solution = timeResponse(circuit(...rc(sine(10, 200, { delay: 2e-3 }))), 12e-3, 1e-7);
    const x = 2 * Math.PI * 200 * 1e-3;
    const [a, p] = [10 / Math.hypot(1, x), Math.atan(x)];
    const closed = (t: number): number => {
      const s = t - 2e-3;
      return s < 0 ? 0 : a * (Math.sin(2 * Math.PI * 200 * s - p) + Math.sin(p) * Math.exp(-s / 1e-3));
    };
    expect(worstError(solution, 'C1.v', closed, 12e-3)).toBeLessThan(1e-7);
  });
});

describe('switches', () => {
  test('by time: RC charged and discharged at the stated instants', () => {
    const solution = timeResponse(
      circuit(
        source('G1', 'in', 'gnd', 10),
        timeSwitch('S1', 'in', 'x', [1e-3, 2e-3, 4e-3]),
        resistor('R1', 'x', 'a', 1e3),
        capacitor('C1', 'a', 'gnd', 1e-6),
        resistor('R2', 'a', 'gnd', 1e3),
      ),
      6e-3,
      1e-7,
    );
    // closed: towards 5 V with 0.5 ms; open: towards 0 V with 1 ms
    const charge = (v: number, t: number): number => 5 + (v - 5) * Math.exp(-t / 0.5e-3);
    const v2 = charge(0, 1e-3);
    const v4 = v2 * Math.exp(-2);
    for (const [t, v] of [
      [1e-3, 0],
      [1.5e-3, charge(0, 0.5e-3)],
      [2e-3, v2],
      [3e-3, v2 * Math.exp(-1)],
      [4e-3, v4],
      [6e-3, charge(v4, 2e-3)],
    ] as const)
      expect(Math.abs(at(solution, 'a', t) - v)).toBeLessThan(1e-7 * 5);
    expect(solution.effort.events).toBe(0);
    // an open contact carries nothing, up to the rounding of what it carries when closed
    expect(Math.abs(at(solution, 'S1.i', 3e-3))).toBeLessThan(1e-16 * 10e-3);
  });

  test.each([1e-4, 1e-7])(
    'by voltage, with hysteresis: relaxation oscillator of closed-form period, accuracy %d',
    (accuracy) => {
      // charges towards 10 V through 10 kΩ; above 6 V a contact of 100 Ω discharges it until 2 V
      const [r, c, on] = [10e3, 1e-6, 100];
      const solution = timeResponse(
        circuit(
          source('G1', 'in', 'gnd', 10),
          resistor('R1', 'in', 'a', r),
          capacitor('C1', 'a', 'gnd', c),
          voltageSwitch('S1', 'a', 'gnd', ['a', 'gnd'], 6, 2, { onResistance: on }),
        ),
        0.1,
        accuracy,
        'rest',
      );
      const rise = (from: number, to: number): number => r * c * Math.log((10 - from) / (10 - to));
      const end = (10 * on) / (r + on);
      const fall = ((r * on) / (r + on)) * c * Math.log((6 - end) / (2 - end));
      const period = rise(2, 6) + fall;
      const first = rise(0, 6);
      const expected: number[] = [];
      for (let k = 0; first + k * period < 0.1; k++) {
        expected.push(first + k * period);
        if (first + k * period + fall < 0.1) expected.push(first + k * period + fall);
      }
      // the switchings: where the recorded mode of the only modal device changes
      const found = [...solution.grid].filter(
        (_, k) => k > 0 && k < solution.modes.length && solution.modes[k] !== solution.modes[k - 1],
      );
      expect(found.length).toBe(expected.length);
      found.forEach((t, k) => {
        expect(Math.abs(t - expected[k]!), `switching ${k}`).toBeLessThan(10 * accuracy * period);
      });
      expect(solution.effort.events).toBe(expected.length);
      expectNear(greatest(quantity(solution, 'a')), 6, accuracy);
    },
  );

  test('an event just before a corner of the source is met (within the last hundredth of the stretch)', () => {
    const edge = { shape: 'points', times: [0, 1e-3, 2e-3], values: [0, 10, 10], repeat: false } as const;
    const solution = timeResponse(
      circuit(
        source('G1', 'in', 'gnd', edge),
        resistor('R1', 'in', 'a', 100),
        // conducts from 9.95 V on: at 0.995 ms
        {
          kind: 'diode',
          designator: 'D1',
          nodes: ['a', 'gnd'],
          law: { law: 'threshold', forwardVoltage: 9.95, onResistance: 5 },
        },
      ),
      2e-3,
    );
    const on = solution.grid[solution.modes.indexOf(1)]!;
    expect(Math.abs(on - 0.995e-3)).toBeLessThan(1e-9 * 2e-3);
    expectNear(at(solution, 'D1.i', 2e-3), 0.05 / 105, 1e-12);
  });

  test('an ideal switch takes over a current in an inductor by way of a clamp', () => {
    // L charged to 0.1 A for 1 ms at 10 V, 100 mH; then the current runs into 20 V and is gone after 0.5 ms
    const solution = timeResponse(
      circuit(
        source('G1', 'in', 'gnd', 10),
        inductor('L1', 'in', 'a', 100e-3),
        timeSwitch('S1', 'a', 'gnd', [1e-3], true),
        source('G2', 'clamp', 'gnd', 30),
        {
          kind: 'diode',
          designator: 'D1',
          nodes: ['a', 'clamp'],
          law: { law: 'threshold', forwardVoltage: 0, onResistance: 0 },
        },
      ),
      2e-3,
      1e-6,
      'rest',
    );
    expectNear(at(solution, 'L1.i', 1e-3), 0.1, 1e-9);
    expectNear(at(solution, 'D1.i', 1.25e-3), 0.05, 1e-9);
    expect(Math.abs(at(solution, 'L1.i', 1.75e-3))).toBeLessThan(1e-11);
    expectNear(between(quantity(solution, 'a'), 1e-3, 1.5e-3).values[2]!, 30, 1e-12);
  });
});
