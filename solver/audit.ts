/**
 * The audit of a solution: does it satisfy the laws that any solution must? It reads each component's current and
 * voltage as a figure would, and does not share the assembly of the equations.
 */
import type { Audit, Solution } from './analysis.ts';
import { type Rounding, roundingOf } from './audit-rounding.ts';
import { REFERENCE_NODE } from './circuit.ts';
import { readQuantity } from './quantities.ts';

export function auditSolution(solution: Solution): Audit {
  const { components } = solution.circuit;
  const count = 4 * Math.max(1, solution.grid.length - 1);
  const sums = new Map<string, Float64Array>();
  const largest = new Map<string, number>();
  const power = new Float64Array(count);
  const magnitude = new Float64Array(count);
  // the first node of a step is the end of the one before, or follows from a jump: the stages are what was solved
  const isStage = (k: number): boolean => k % 4 !== 0;
  for (const component of components) {
    const { designator, nodes } = component;
    const current = readQuantity(solution, { designator, property: 'i' }).values;
    const voltage = readQuantity(solution, { designator, property: 'v' }).values;
    for (let k = 0; k < count; k++) {
      const p = voltage[k]! * current[k]!;
      power[k]! += p;
      magnitude[k]! += Math.abs(p);
    }
    for (const [node, sign] of [
      [nodes[0], 1],
      [nodes[1], -1],
    ] as const) {
      if (node === REFERENCE_NODE) continue;
      const sum = sums.get(node) ?? new Float64Array(count);
      sums.set(node, sum);
      let peak = largest.get(node) ?? 0;
      for (let k = 0; k < count; k++) {
        sum[k]! += sign * current[k]!;
        if (isStage(k)) peak = Math.max(peak, Math.abs(current[k]!));
      }
      largest.set(node, peak);
    }
  }
  const { grid } = solution;
  const rounding = roundingOf(solution);
  /** How much of `value` at point k rounding does not account for. */
  const beyond = (value: number, { steady, charge }: Rounding, k: number): number => {
    const width = (grid[(k >> 2) + 1] ?? 0) - grid[k >> 2]!;
    return Math.abs(value) - steady - (width > 0 ? charge / width : 0);
  };
  // a node that carries next to nothing is measured by what its circuit carries
  const floor = 1e-9 * Math.max(0, ...largest.values());
  let kirchhoff = 0;
  for (const [node, sum] of sums) {
    const peak = Math.max(largest.get(node)!, floor);
    if (peak === 0) continue;
    const allowed = rounding.currents.get(node) ?? NO_ROUNDING;
    for (let k = 0; k < count; k++) if (isStage(k)) kirchhoff = Math.max(kirchhoff, beyond(sum[k]!, allowed, k) / peak);
  }
  let tellegen = 0;
  let greatest = 0;
  for (let k = 0; k < count; k++) greatest = Math.max(greatest, magnitude[k]!);
  if (greatest > 0)
    for (let k = 0; k < count; k++)
      if (isStage(k)) tellegen = Math.max(tellegen, beyond(power[k]!, rounding.power, k) / greatest);
  return { kirchhoff, tellegen };
}

const NO_ROUNDING: Rounding = { steady: 0, charge: 0 };
