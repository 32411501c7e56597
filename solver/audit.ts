/**
 * The audit of a solution: does it satisfy the laws that any solution must? It reads each component's current and
 * voltage as a figure would, and does not share the assembly of the equations.
 */
import type { Audit, Solution } from './analysis.ts';
import { type Component, REFERENCE_NODE } from './circuit.ts';
import { readQuantity } from './quantities.ts';

export function auditSolution(solution: Solution): Audit {
  const { components } = solution.circuit;
  const count = 4 * Math.max(1, solution.grid.length - 1);
  const sums = new Map<string, Float64Array>();
  const largest = new Map<string, number>();
  const power = new Float64Array(count);
  const magnitude = new Float64Array(count);
  // what the rounding of potentials alone lets a current into the node, and the sum of powers, be wrong by
  const roundedCurrent = new Map<string, number>();
  let roundedPower = 0;
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
    const conductance = conductanceOf(component);
    if (conductance > 0) {
      const potentials = nodes.map((node) => greatestMagnitude(readQuantity(solution, { node }).values));
      const potential = Math.max(...potentials);
      const rounding = POTENTIAL_ROUNDING * (conductance * potential + greatestTabled(component));
      for (const node of nodes) roundedCurrent.set(node, (roundedCurrent.get(node) ?? 0) + rounding);
      roundedPower += potential * rounding;
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
  // a node that carries next to nothing is measured by what its circuit carries
  const floor = 1e-9 * Math.max(0, ...largest.values());
  let kirchhoff = 0;
  for (const [node, sum] of sums) {
    const peak = Math.max(largest.get(node)!, floor);
    if (peak === 0) continue;
    const rounding = roundedCurrent.get(node) ?? 0;
    for (let k = 0; k < count; k++)
      if (isStage(k)) kirchhoff = Math.max(kirchhoff, (Math.abs(sum[k]!) - rounding) / peak);
  }
  let tellegen = 0;
  let greatest = 0;
  for (let k = 0; k < count; k++) greatest = Math.max(greatest, magnitude[k]!);
  if (greatest > 0)
    for (let k = 0; k < count; k++)
      if (isStage(k)) tellegen = Math.max(tellegen, (Math.abs(power[k]!) - roundedPower) / greatest);
  return { kirchhoff, tellegen };
}

/** Relative rounding of the difference of two potentials, each off by a unit in its last place or two. */
const POTENTIAL_ROUNDING = 4 * Number.EPSILON;

/** Siemens by which potentials are turned into a current; 0 where the current is found otherwise. */
function conductanceOf(component: Component): number {
  if (component.kind === 'resistor') return Math.abs(1 / component.resistance);
  if (component.kind === 'curve') {
    const { voltages, currents } = component;
    const secants = currents.slice(1).map((i, k) => (i - currents[k]!) / (voltages[k + 1]! - voltages[k]!));
    return secants.reduce((greatest, secant) => Math.max(greatest, Math.abs(secant)), 0);
  }
  const byVoltage = component.kind === 'controlled-source' && component.control.quantity === 'voltage';
  return byVoltage && component.output === 'current' ? Math.abs(component.gain) : 0;
}

/** The largest current (ampere) of a table, of which interpolated ones are differences. */
function greatestTabled(component: Component): number {
  return component.kind === 'curve' ? component.currents.reduce((most, i) => Math.max(most, Math.abs(i)), 0) : 0;
}

function greatestMagnitude(values: Float64Array): number {
  return values.reduce((greatest, value) => Math.max(greatest, Math.abs(value)), 0);
}
