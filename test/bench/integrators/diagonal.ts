/**
 * The lamp circuit by a diagonally implicit method: the two nodal equations in charge form, a full Newton iteration at each stage, errors held step by
 * step, a new start at each corner of the source. The least that is needed to compare methods on equal terms.
 */
import { evaluateJunction, junctionAt } from '../../../solver/devices/exponential-diode.ts';
import { waveCorners, waveValue } from '../../../solver/wave-evaluation.ts';
import {
  type LampCase,
  LED_RESISTANCE,
  PERIODS,
  SATURATION_CURRENT,
  SLOPE_VOLTAGE,
  SOURCE_RESISTANCE,
} from '../lamp.ts';
import type { Tableau } from './tableaux.ts';

export interface DiagonalOutcome {
  readonly charges: [number, number];
  readonly steps: number;
  readonly rejected: number;
  /** Linear systems solved. */
  readonly solves: number;
}

const led = junctionAt(
  {
    law: 'exponential',
    saturationCurrent: SATURATION_CURRENT,
    slope: { voltage: SLOPE_VOLTAGE },
    seriesResistance: LED_RESISTANCE,
    at: 298.15,
    temperature: { forwardVoltage: 0 },
  },
  298.15,
);

export function solveLampDiagonally(lamp: LampCase, tableau: Tableau, tolerance: number): DiagonalOutcome {
  const { a: rows, embedded } = tableau;
  const stages = rows.length;
  const weights = rows[stages - 1]!;
  const abscissae = rows.map((row) => row.reduce((sum, value) => sum + value, 0));
  const capacitance = lamp.capacitance;
  const end = PERIODS * lamp.period;
  const keep = end - lamp.period;
  const corners = [...new Set([...waveCorners(lamp.wave, 0, end), keep, end])].sort((x, y) => x - y);
  const power = 1 / (Math.min(tableau.order, tableau.embeddedOrder) + 1);
  const law = new Float64Array(2);
  const current = { first: 0, second: 0, conductance: 0 };
  const pair = (x: number): void => {
    evaluateJunction(led, x, law);
    current.first = law[0]!;
    const conductance = law[1]!;
    evaluateJunction(led, -x, law);
    current.second = law[0]!;
    current.conductance = conductance + law[1]!;
  };
  let t = 0;
  /** Potentials of the node after the resistor and of the pair. */
  let a = 0;
  let x = 0;
  const charges: [number, number] = [0, 0];
  let steps = 0;
  let rejected = 0;
  let solves = 0;
  let h = 1e-5 * lamp.period;
  for (const corner of corners) {
    const middle = (t + corner) / 2;
    const quarter = (corner - t) / 4;
    const slope =
      lamp.wave.shape === 'sine'
        ? undefined
        : (waveValue(lamp.wave, middle + quarter) - waveValue(lamp.wave, middle)) / quarter;
    const base = waveValue(lamp.wave, middle);
    const drive = (time: number): number =>
      slope === undefined ? waveValue(lamp.wave, time) : base + slope * (time - middle);
    if (t === keep) charges.fill(0);
    h = Math.min(h, 1e-3 * (corner - t));
    while (t < corner) {
      const step = h * 1.0001 >= corner - t ? corner - t : h;
      // charge of the capacitor and its rate at the stages: q' = (v - a) / R = i(x)
      const rates: number[] = [];
      const firsts: number[] = [];
      const seconds: number[] = [];
      const start = capacitance * (a - x);
      let stageA = a;
      let stageX = x;
      let failed = false;
      for (let i = 0; i < stages && !failed; i++) {
        const diagonal = rows[i]![i]!;
        const v = drive(t + abscissae[i]! * step);
        let known = start;
        for (let j = 0; j < i; j++) known += step * rows[i]![j]! * rates[j]!;
        if (diagonal === 0) pair(stageX);
        else {
          failed = true;
          for (let k = 0; k < 25; k++) {
            pair(stageX);
            solves++;
            const net = current.first - current.second;
            // charge: C (a - x) - known - h γ i(x) = 0; resistor: (v - a) / R - i(x) = 0
            const f1 = capacitance * (stageA - stageX) - known - step * diagonal * net;
            const f2 = (v - stageA) / SOURCE_RESISTANCE - net;
            const j12 = -capacitance - step * diagonal * current.conductance;
            const j21 = -1 / SOURCE_RESISTANCE;
            const determinant = capacitance * -current.conductance - j12 * j21;
            const da = (f1 * -current.conductance - j12 * f2) / determinant;
            const dx = (capacitance * f2 - j21 * f1) / determinant;
            stageA -= da;
            stageX -= dx;
            if (!Number.isFinite(stageX)) break;
            if (Math.abs(da) + Math.abs(dx) < 1e-3 * tolerance * (1 + Math.abs(stageA))) {
              failed = false;
              pair(stageX);
              break;
            }
          }
        }
        rates.push(current.first - current.second);
        firsts.push(current.first);
        seconds.push(current.second);
      }
      let error = Number.POSITIVE_INFINITY;
      if (!failed) {
        let difference = 0;
        for (let i = 0; i < stages; i++) difference += step * (weights[i]! - embedded[i]!) * rates[i]!;
        error = Math.abs(difference) / (tolerance * (Math.abs(start) + capacitance));
      }
      if (!(error <= 1)) {
        rejected++;
        h = step * Math.max(0.1, Math.min(0.5, 0.9 * error ** -power));
        continue;
      }
      for (let i = 0; i < stages; i++) {
        charges[0] += step * weights[i]! * firsts[i]!;
        charges[1] += step * weights[i]! * seconds[i]!;
      }
      a = stageA;
      x = stageX;
      t = step === corner - t ? corner : t + step;
      steps++;
      h = step * Math.min(5, 0.9 * Math.max(error, 1e-4) ** -power);
    }
    t = corner;
  }
  return { charges, steps, rejected, solves };
}
