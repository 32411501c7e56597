/** Random valid circuits: solved, or refused with a sensible message; never undefined numbers, never without end. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type AnalysisRequest, NoSolution } from '../../solver/analysis.ts';
import type { Circuit, Component } from '../../solver/circuit.ts';
import { solve } from '../../solver/solve.ts';
import type { Wave } from '../../solver/waves.ts';
import {
  capacitor,
  circuit,
  controlled,
  currentSource,
  diode,
  exponential,
  inductor,
  number,
  operatingPoint,
  resistor,
  sine,
  source,
  threshold,
  timeSwitch,
  triangle,
  VT_300,
  voltageSwitch,
} from './circuits.ts';

const node = (k: number): string => (k === 0 ? 'gnd' : `n${k}`);
const decade = (low: number, high: number): fc.Arbitrary<number> =>
  fc.integer({ min: 12 * low, max: 12 * high }).map((k) => Number((10 ** (k / 12)).toPrecision(2)));
const volts = fc.integer({ min: -240, max: 240 }).map((k) => k / 10);

const wave: fc.Arbitrary<Wave> = fc.oneof(
  volts.map((value): Wave => ({ shape: 'constant', value })),
  volts.map((v) => sine(v, 1000)),
  volts.map((v) => triangle(-v, v, 500)),
  volts.map(
    (high): Wave => ({ shape: 'pulse', low: 0, high, frequency: 1000, width: 3e-4, rise: 0, fall: 1e-5, delay: 1e-4 }),
  ),
);

type Maker = (designator: string, a: string, b: string) => Component;
const element: fc.Arbitrary<Maker> = fc.oneof(
  decade(1, 5).map(
    (value): Maker =>
      (d, a, b) =>
        resistor(d, a, b, value),
  ),
  decade(-10, -5).map(
    (value): Maker =>
      (d, a, b) =>
        capacitor(d, a, b, value),
  ),
  decade(-6, -2).map(
    (value): Maker =>
      (d, a, b) =>
        inductor(d, a, b, value),
  ),
  fc.tuple(decade(-18, -9), fc.constantFrom(0, 0, 1, 10)).map(
    ([is, rs]): Maker =>
      (d, a, b) =>
        diode(d, a, b, exponential(is, 1.7 * VT_300, rs)),
  ),
  fc.tuple(fc.integer({ min: 0, max: 40 }), fc.constantFrom(0, 5)).map(
    ([v, r]): Maker =>
      (d, a, b) =>
        diode(d, a, b, threshold(v / 10, r)),
  ),
  fc.constantFrom<Maker>(
    (d, a, b) => timeSwitch(d, a, b, [3e-4, 1.1e-3], false, { onResistance: 1 }),
    (d, a, b) => voltageSwitch(d, a, b, ['in', 'gnd'], 3, 1, { onResistance: 10, offConductance: 1e-9 }),
  ),
  fc.integer({ min: 1, max: 20 }).map(
    (k): Maker =>
      (d, a, b) =>
        controlled(d, a, b, 'current', [a, b], k * 1e-5),
  ),
  fc.integer({ min: 1, max: 9 }).map(
    (k): Maker =>
      (d, a, b) =>
        currentSource(d, a, b, k * 1e-4),
  ),
);

/** Every node has a resistor to the one before, so that no node is loose and no source stands alone; the first node is a source's. */
const circuits = (elements: fc.Arbitrary<Maker>): fc.Arbitrary<Circuit> =>
  fc.integer({ min: 1, max: 4 }).chain((nodes) =>
    fc
      .record({
        drive: wave,
        last: decade(2, 4),
        spine: fc.array(decade(1, 4), { minLength: nodes, maxLength: nodes }),
        more: fc.array(fc.tuple(elements, fc.nat(nodes), fc.nat(nodes)), { minLength: 1, maxLength: 9 - nodes }),
      })
      .map(({ drive, last, spine, more }) =>
        circuit(
          source('G1', 'in', 'gnd', drive),
          ...spine.map((ohm, k) => resistor(`R${k + 1}`, k === 0 ? 'in' : node(k), node(k + 1), ohm)),
          resistor('R0', node(nodes), 'gnd', last),
          ...more
            .filter(([, a, b]) => a !== b)
            .flatMap(([make, a, b], k): Component[] => {
              const made = make(`X${k + 1}`, node(a), node(b));
              // a loop of inductors leaves a direct current open: each has its winding's resistance
              if (made.kind !== 'inductor') return [made];
              const inner = `w${k + 1}`;
              return [
                inductor(made.designator, node(a), inner, made.inductance),
                resistor(`W${k + 1}`, inner, node(b), 2),
              ];
            }),
        ),
      ),
  );

interface Outcome {
  readonly kind: 'solved' | 'refused';
  readonly reason?: string;
  readonly milliseconds: number;
}

function attempt(of: Circuit, request: AnalysisRequest, accuracy = 1e-4): Outcome {
  const begin = performance.now();
  try {
    const solution = solve(of, request, accuracy);
    expect(solution.unknowns.every(Number.isFinite), 'every unknown is a number').toBe(true);
    expect(
      solution.grid.every((t, k) => k === 0 || t >= solution.grid[k - 1]!),
      'time goes on',
    ).toBe(true);
    // what stages leave open of a steep law (see amplifiers and doublers) and of idle nodes, but never a contradiction
    expect(solution.audit.tellegen).toBeLessThan(0.02);
    return { kind: 'solved', milliseconds: performance.now() - begin };
  } catch (error) {
    if (!(error instanceof NoSolution)) throw error;
    expect(error.details.analysis).toBe(request.find);
    expect(error.details.advice).not.toBe('');
    expect(error.details.reason).not.toMatch(/NaN|undefined|Infinity/);
    return { kind: 'refused', reason: error.details.reason, milliseconds: performance.now() - begin };
  }
}

/** Shares of circuits that are refused, and the longest time; refusals are printed, so that a rising number is seen. */
function survey(outcomes: readonly Outcome[]): { refused: number; longest: number } {
  const refused = outcomes.filter(({ kind }) => kind === 'refused');
  for (const { reason } of refused) console.info(`refused: ${reason}`);
  return {
    refused: refused.length / outcomes.length,
    longest: Math.max(...outcomes.map(({ milliseconds }) => milliseconds)),
  };
}

describe('random circuits of up to 12 components', () => {
  test('operating points', () => {
    const outcomes: Outcome[] = [];
    fc.assert(
      fc.property(circuits(element), (of) => {
        outcomes.push(attempt(of, { find: 'operating point' }));
      }),
      { numRuns: 1500, seed: 1 },
    );
    const { refused, longest } = survey(outcomes);
    expect(refused).toBe(0);
    expect(longest).toBeLessThan(5000);
  });

  test('time responses from the operating point', () => {
    const outcomes: Outcome[] = [];
    fc.assert(
      fc.property(circuits(element), (of) => {
        outcomes.push(attempt(of, { find: 'time response', until: 2e-3, from: 0, start: 'operating point' }, 1e-3));
      }),
      { numRuns: 300, seed: 2 },
    );
    const { refused, longest } = survey(outcomes);
    expect(refused).toBeLessThan(0.01);
    expect(longest).toBeLessThan(10_000);
  });

  test('time responses from rest', () => {
    const outcomes: Outcome[] = [];
    fc.assert(
      fc.property(circuits(element), (of) => {
        outcomes.push(attempt(of, { find: 'time response', until: 2e-3, from: 0, start: 'rest' }, 1e-3));
      }),
      { numRuns: 300, seed: 3 },
    );
    const { refused, longest } = survey(outcomes);
    expect(refused).toBeLessThan(0.01);
    expect(longest).toBeLessThan(10_000);
  });
});

test('superposition: the operating point of a linear circuit is the sum of those of its sources', () => {
  const linear: fc.Arbitrary<Maker> = fc.oneof(
    decade(1, 5).map(
      (value): Maker =>
        (d, a, b) =>
          resistor(d, a, b, value),
    ),
    fc.integer({ min: 1, max: 20 }).map(
      (k): Maker =>
        (d, a, b) =>
          controlled(d, a, b, 'current', [a, b], k * 1e-5),
    ),
    fc.integer({ min: 1, max: 9 }).map(
      (k): Maker =>
        (d, a, b) =>
          currentSource(d, a, b, k * 1e-4),
    ),
  );
  fc.assert(
    fc.property(circuits(linear), (of) => {
      const isSource = (component: Component): boolean =>
        component.kind === 'source' || component.kind === 'current-source';
      const silenced = (kept: string): Circuit => ({
        ...of,
        components: of.components.map((component) =>
          isSource(component) && component.designator !== kept
            ? ({ ...component, wave: { shape: 'constant', value: 0 } } as Component)
            : component,
        ),
      });
      const all = operatingPoint(of);
      const parts = of.components.filter(isSource).map(({ designator }) => operatingPoint(silenced(designator)));
      const nodes = new Set(of.components.flatMap((component) => component.nodes));
      for (const name of nodes) {
        const sum = parts.reduce((total, part) => total + number(part, name), 0);
        const scale = parts.reduce((total, part) => total + Math.abs(number(part, name)), 1);
        expect(Math.abs(number(all, name) - sum)).toBeLessThan(1e-11 * scale);
      }
    }),
    { numRuns: 200, seed: 4 },
  );
});
