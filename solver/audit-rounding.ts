/**
 * What rounding alone can make of a solution that is right: potentials are held to their last digit, and a current that is found from a
 * difference of two of them is no better than that. Over a very short step a capacitor's current is such a difference, divided by the step.
 */
import type { Solution } from './analysis.ts';
import type { Component } from './circuit.ts';
import { readQuantity } from './quantities.ts';

/** Ampere, or watt: `steady` at every instant, and `charge` (coulomb, or joule) by the step's length. */
export interface Rounding {
  steady: number;
  charge: number;
}

/** Relative rounding of the difference of two potentials, each off by a unit in its last place or two and by what the sums of all steps before lost. */
function potentialRounding({ grid }: Solution): number {
  return Number.EPSILON * (4 + Math.sqrt(grid.length));
}

/** The largest weight of a value in the derivative of the cubic of a step (see quantities.ts), rounded up. */
const DERIVATIVE_WEIGHT = 10;

/** For the sum of the currents into each node, and for the sum of the powers. */
export function roundingOf(solution: Solution): { currents: Map<string, Rounding>; power: Rounding } {
  const currents = new Map<string, Rounding>();
  const power: Rounding = { steady: 0, charge: 0 };
  const rounding = potentialRounding(solution);
  for (const component of solution.circuit.components) {
    const conductance = conductanceOf(component);
    const capacitance = component.kind === 'capacitor' ? component.capacitance : 0;
    if (conductance === 0 && capacitance === 0) continue;
    const potential = Math.max(
      ...component.nodes.map((node) => greatestMagnitude(readQuantity(solution, { node }).values)),
    );
    const steady = rounding * (conductance * potential + greatestTabled(component));
    const charge = DERIVATIVE_WEIGHT * rounding * capacitance * potential;
    for (const node of component.nodes) {
      const known = currents.get(node) ?? { steady: 0, charge: 0 };
      currents.set(node, { steady: known.steady + steady, charge: known.charge + charge });
    }
    power.steady += potential * steady;
    power.charge += potential * charge;
  }
  return { currents, power };
}

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
