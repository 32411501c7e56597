/**
 * The exponential junction behind a resistance as one terminal law i(v) with its conductance, in closed form by the
 * Wright omega function (T. C. Banwell and A. Jayakumar, 2000), so that no inner node is needed and Newton's method
 * meets a law that grows no faster than a straight line.
 */
import type { Breakdown, ExponentialLaw } from '../circuit.ts';
import { REFERENCE_TEMPERATURE } from '../circuit.ts';
import { thermalVoltage } from './constants.ts';
import { wrightOmega } from './wright-omega.ts';

/** Parameters at one temperature, SI. */
export interface JunctionLaw {
  readonly saturationCurrent: number;
  /** Volt for a factor e. */
  readonly slopeVoltage: number;
  readonly seriesResistance: number;
  /** Added to the terminal voltage before the law is evaluated: the shift of the forward voltage with temperature. */
  readonly voltageShift: number;
  /** (slopeVoltage / seriesResistance) and ln(saturationCurrent seriesResistance / slopeVoltage), where resistance > 0. */
  readonly currentScale: number;
  readonly logarithm: number;
  /** The mirrored law of breakdown, evaluated at -v - breakdownVoltage. */
  readonly breakdown?: { readonly law: JunctionLaw; readonly voltage: number };
}

/**
 * Above this exponent a junction without series resistance continues as its tangent: e^100 times the saturation current is far
 * beyond any real current, and Newton's method cannot overflow on its way.
 */
const LARGEST_EXPONENT = 100;

/** The law's parameters at `kelvin`. */
export function junctionAt(law: ExponentialLaw, kelvin: number): JunctionLaw {
  const slopeVoltage = 'ideality' in law.slope ? law.slope.ideality * thermalVoltage(kelvin) : law.slope.voltage;
  let saturationCurrent = law.saturationCurrent;
  let voltageShift = 0;
  if (kelvin !== law.at) {
    if ('energyGap' in law.temperature) {
      // S. M. Sze, Physics of Semiconductor Devices: I_S ~ T^(3/n) exp(-E_g / n k T)
      const ideality = 'ideality' in law.slope ? law.slope.ideality : law.slope.voltage / thermalVoltage(law.at);
      const ratio = kelvin / law.at;
      const gap = law.temperature.energyGap / (ideality * thermalVoltage(law.at));
      saturationCurrent *= ratio ** (3 / ideality) * Math.exp(gap * (1 - 1 / ratio));
    } else {
      voltageShift = -law.temperature.forwardVoltage * (kelvin - law.at);
      // at a fixed current the voltage moves by the stated coefficient alone, so the slope stays the one at `at`
      const fixed = 'ideality' in law.slope ? law.slope.ideality * thermalVoltage(law.at) : law.slope.voltage;
      return finish(saturationCurrent, fixed, law.seriesResistance, voltageShift, breakdownAt(law.breakdown, kelvin));
    }
  }
  return finish(
    saturationCurrent,
    slopeVoltage,
    law.seriesResistance,
    voltageShift,
    breakdownAt(law.breakdown, kelvin),
  );
}

function breakdownAt(breakdown: Breakdown | undefined, kelvin: number): JunctionLaw['breakdown'] {
  if (!breakdown) return undefined;
  const voltage = breakdown.voltage + (breakdown.temperatureCoefficient ?? 0) * (kelvin - REFERENCE_TEMPERATURE);
  // stated at `current` and at the terminals: the junction's own voltage is less by the drop in the resistance
  const law = finish(breakdown.current, breakdown.slopeVoltage, breakdown.resistance, 0, undefined);
  return { law, voltage: voltage - breakdown.resistance * breakdown.current };
}

function finish(
  saturationCurrent: number,
  slopeVoltage: number,
  seriesResistance: number,
  voltageShift: number,
  breakdown: JunctionLaw['breakdown'],
): JunctionLaw {
  const currentScale = seriesResistance > 0 ? slopeVoltage / seriesResistance : 0;
  const logarithm = seriesResistance > 0 ? Math.log(saturationCurrent / currentScale) : 0;
  return { saturationCurrent, slopeVoltage, seriesResistance, voltageShift, currentScale, logarithm, breakdown };
}

/** Current and conductance at the terminal voltage, to result[0] and result[1]. */
export function evaluateJunction(law: JunctionLaw, voltage: number, result: Float64Array): void {
  const v = voltage + law.voltageShift;
  exponential(law, v, law.saturationCurrent, result);
  const { breakdown } = law;
  if (breakdown) {
    const current = result[0]!;
    const conductance = result[1]!;
    exponential(breakdown.law, -v - breakdown.voltage, 0, result);
    result[0] = current - result[0]!;
    result[1] = conductance + result[1]!;
  }
}

/** I exp(u / slope) - subtract with u = v - resistance · I exp(u / slope), and its derivative by v. */
function exponential(law: JunctionLaw, v: number, subtract: number, result: Float64Array): void {
  const { saturationCurrent, slopeVoltage, seriesResistance } = law;
  if (seriesResistance > 0) {
    const w = wrightOmega((v + subtract * seriesResistance) / slopeVoltage + law.logarithm);
    result[0] = law.currentScale * w - subtract;
    result[1] = w / ((1 + w) * seriesResistance);
    return;
  }
  const exponent = v / slopeVoltage;
  if (exponent > LARGEST_EXPONENT) {
    const top = saturationCurrent * Math.exp(LARGEST_EXPONENT);
    result[0] = top * (1 + exponent - LARGEST_EXPONENT) - subtract;
    result[1] = top / slopeVoltage;
    return;
  }
  const current = saturationCurrent * Math.exp(exponent);
  // near the origin the difference is taken without cancellation
  result[0] =
    subtract === saturationCurrent && Math.abs(exponent) < 1
      ? saturationCurrent * Math.expm1(exponent)
      : current - subtract;
  result[1] = current / slopeVoltage;
}

/** Above this voltage a Newton step must not be trusted to be linear: where the current reaches about its useful range. */
export function criticalVoltage(law: JunctionLaw): number {
  return law.slopeVoltage * Math.log(law.slopeVoltage / (Math.SQRT2 * law.saturationCurrent)) - law.voltageShift;
}
