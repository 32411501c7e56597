/** Networks of resistors, sources and threshold diodes against the obvious oracle: every combination of states is tried. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Component, Diode } from '../../solver/circuit.ts';
import { circuit, currentSource, diode, expectAudit, number, operatingPoint, resistor, threshold } from './circuits.ts';

interface Network {
  readonly nodes: number;
  /** Node 0 is the reference. */
  readonly resistors: readonly (readonly [a: number, b: number, ohm: number])[];
  readonly currents: readonly (readonly [into: number, ampere: number])[];
  readonly diodes: readonly (readonly [anode: number, cathode: number, volt: number, ohm: number])[];
}

/** Gaussian elimination with partial pivoting; undefined where the matrix is singular. */
function solveDense(a: number[][], b: number[]): number[] | undefined {
  const n = b.length;
  const m = a.map((row, i) => [...row, b[i]!]);
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(m[i]![k]!) > Math.abs(m[pivot]![k]!)) pivot = i;
    if (Math.abs(m[pivot]![k]!) < 1e-12) return undefined;
    [m[k], m[pivot]] = [m[pivot]!, m[k]!];
    for (let i = 0; i < n; i++) {
      if (i === k) continue;
      const factor = m[i]![k]! / m[k]![k]!;
      for (let j = k; j <= n; j++) m[i]![j]! -= factor * m[k]![j]!;
    }
  }
  return m.map((row, i) => row[n]! / row[i]!);
}

/** Node potentials in the first combination of states that does not contradict itself. */
function bruteForce({ nodes, resistors, currents, diodes }: Network): number[] | undefined {
  const n = nodes + diodes.length;
  for (let states = 0; states < 1 << diodes.length; states++) {
    const a = Array.from({ length: n }, () => new Array<number>(n).fill(0));
    const b = new Array<number>(n).fill(0);
    const add = (row: number, column: number, value: number): void => {
      if (row >= 0 && column >= 0) a[row]![column]! += value;
    };
    for (const [p, q, ohm] of resistors) {
      for (const [row, column, sign] of [
        [p, p, 1],
        [q, q, 1],
        [p, q, -1],
        [q, p, -1],
      ] as const)
        add(row - 1, column - 1, (sign * 1e3) / ohm);
    }
    for (const [node, ampere] of currents) if (node > 0) b[node - 1]! += 1e3 * ampere;
    diodes.forEach(([p, q, volt, ohm], k) => {
      const branch = nodes + k;
      // currents in milliampere, so that both kinds of unknown are of one size
      add(p - 1, branch, 1);
      add(q - 1, branch, -1);
      if (states & (1 << k)) {
        add(branch, p - 1, 1);
        add(branch, q - 1, -1);
        add(branch, branch, -ohm / 1e3);
        b[branch] = volt;
      } else add(branch, branch, 1);
    });
    const x = solveDense(a, b);
    if (!x) continue;
    const potential = (node: number): number => (node === 0 ? 0 : x[node - 1]!);
    const fits = diodes.every(([p, q, volt], k) =>
      states & (1 << k) ? x[nodes + k]! >= -1e-9 : potential(p) - potential(q) <= volt + 1e-9,
    );
    if (fits) return x.slice(0, nodes);
  }
  return undefined;
}

const name = (node: number): string => (node === 0 ? 'gnd' : `n${node}`);

function components({ resistors, currents, diodes }: Network): Component[] {
  return [
    ...resistors.map(([a, b, ohm], k) => resistor(`R${k}`, name(a), name(b), ohm)),
    ...currents.map(([into, ampere], k) => currentSource(`G${k}`, 'gnd', name(into), ampere)),
    ...diodes.map(([a, b, volt, ohm], k): Diode => diode(`D${k}`, name(a), name(b), threshold(volt, ohm))),
  ];
}

const ohm = fc.integer({ min: 1, max: 50 }).map((k) => 100 * k);

/** Every node has a resistor to the reference, so that the potentials are unique (a sum of monotone laws is monotone). */
const network = (onResistance: fc.Arbitrary<number>): fc.Arbitrary<Network> =>
  fc.integer({ min: 1, max: 5 }).chain((nodes) => {
    const node = fc.nat(nodes);
    const pair = fc.tuple(node, node).filter(([a, b]) => a !== b);
    return fc.record({
      nodes: fc.constant(nodes),
      resistors: fc
        .tuple(fc.array(ohm, { minLength: nodes, maxLength: nodes }), fc.array(fc.tuple(pair, ohm), { maxLength: 4 }))
        .map(([own, more]) => [
          ...own.map((value, k) => [k + 1, 0, value] as const),
          ...more.map(([[a, b], value]) => [a, b, value] as const),
        ]),
      currents: fc.array(
        fc.tuple(
          fc.integer({ min: 1, max: nodes }),
          fc.integer({ min: -100, max: 100 }).map((k) => 1e-4 * k),
        ),
        { minLength: 1, maxLength: 3 },
      ),
      diodes: fc.array(
        fc
          .tuple(pair, fc.integer({ min: 0, max: 30 }), onResistance)
          .map(([[a, b], tenths, on]) => [a, b, tenths / 10, on] as const),
        { minLength: 1, maxLength: 6 },
      ),
    });
  });

function agrees(given: Network): void {
  const expected = bruteForce(given);
  if (!expected) return;
  const solution = operatingPoint(circuit(...components(given)));
  const scale = Math.max(1, ...expected.map(Math.abs));
  expected.forEach((potential, k) => {
    expect(Math.abs(number(solution, name(k + 1)) - potential)).toBeLessThan(1e-9 * scale);
  });
  expectAudit(solution, 1e-8);
}

describe('operating points of threshold networks', () => {
  test('with on-resistance: the potentials of the only consistent states', () => {
    fc.assert(fc.property(network(ohm.map((value) => value / 100)), agrees), { numRuns: 1500, seed: 1 });
  });

  test('ideal diodes', () => {
    // two ideal diodes of the same two nodes would leave their shares of the current open: only the potentials are compared
    fc.assert(fc.property(network(fc.constant(0)), agrees), { numRuns: 1500, seed: 2 });
  });
});
