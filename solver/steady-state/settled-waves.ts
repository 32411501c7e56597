/** What sources do once every delay has passed: the waves of a periodic steady state, and the period that they share. */
import type { Circuit } from '../circuit.ts';
import type { Wave } from '../waves.ts';

/** Periods in the sources' common period, at most: beyond, they are taken as having none in common. */
const LARGEST_MULTIPLE = 1000;

/** Periods are commensurate when their ratio is that of two integers to this relative accuracy. */
const RATIO_TOLERANCE = 1e-9;

export type CommonPeriod =
  | { readonly period: number }
  /** Why there is none, and what to do, in words. */
  | { readonly reason: string; readonly advice: string };

/** The circuit with waves that have been running for ever; components without a repeating wave stay as they are. */
export function settle(circuit: Circuit): Circuit {
  return {
    ...circuit,
    components: circuit.components.map((component) =>
      component.kind === 'source' || component.kind === 'current-source'
        ? { ...component, wave: settledWave(component.wave) }
        : component,
    ),
  };
}

function settledWave(wave: Wave): Wave {
  switch (wave.shape) {
    case 'sine':
      return { ...wave, delay: 0, phase: wave.phase - 2 * Math.PI * wave.frequency * wave.delay };
    case 'triangle':
    case 'ramp':
      return { ...wave, delay: beforeZero(wave.delay, 1 / wave.frequency) };
    case 'pulse':
      return wave.frequency > 0 ? { ...wave, delay: beforeZero(wave.delay, 1 / wave.frequency) } : wave;
    case 'points': {
      if (!wave.repeat) return wave;
      const first = wave.times[0]!;
      const shift = beforeZero(first, wave.times.at(-1)! - first) - first;
      return { ...wave, times: wave.times.map((time) => time + shift) };
    }
    case 'sum':
      return { ...wave, waves: wave.waves.map(settledWave) };
    default:
      return wave;
  }
}

/** The delay less as many periods as leave it at or below zero. */
function beforeZero(delay: number, period: number): number {
  return delay - Math.ceil(delay / period - 1e-12) * period;
}

/** The shortest time after which all sources repeat together; `stated` overrides and is checked. */
export function commonPeriod(circuit: Circuit, stated?: number): CommonPeriod {
  const found: { designator: string; period: number }[] = [];
  for (const component of circuit.components) {
    if (component.kind === 'switch' && component.drive.by === 'time' && component.drive.toggles.length > 0) {
      return {
        reason: `${component.designator} switches at stated times, which do not repeat`,
        advice: 'drive the switch by a voltage, or ask for a time response',
      };
    }
    if (component.kind !== 'source' && component.kind !== 'current-source') continue;
    for (const wave of partsOf(component.wave)) {
      const period = periodOf(wave);
      if (period === 0) continue;
      if (period === undefined) {
        return {
          reason: `the wave of ${component.designator} does not repeat`,
          advice: 'give points `repeat: true`, a pulse a frequency, or ask for a time response',
        };
      }
      found.push({ designator: component.designator, period });
    }
  }
  if (stated !== undefined) {
    const odd = found.find(({ period }) => !isMultiple(stated, period));
    if (odd) {
      return {
        reason: `the stated period is not a multiple of the period of ${odd.designator} (${seconds(odd.period)})`,
        advice: `state a multiple of ${seconds(odd.period)}, or leave \`period\` out`,
      };
    }
    return { period: stated };
  }
  if (found.length === 0) {
    return {
      reason: 'no source repeats, so there is no period',
      advice: 'ask for an operating point, or state a `period` for a circuit that oscillates on its own',
    };
  }
  let common = found[0]!;
  for (const other of found.slice(1)) {
    let multiple = 1;
    while (multiple <= LARGEST_MULTIPLE && !isMultiple(multiple * common.period, other.period)) multiple++;
    if (multiple > LARGEST_MULTIPLE) {
      return {
        reason: `the periods of ${common.designator} (${seconds(common.period)}) and ${other.designator} (${seconds(other.period)}) have no common multiple up to ${LARGEST_MULTIPLE} of either`,
        advice: 'state the `period`, or round the frequencies so that they stand in the ratio of small whole numbers',
      };
    }
    common = { designator: common.designator, period: multiple * common.period };
  }
  return { period: common.period };
}

function partsOf(wave: Wave): readonly Wave[] {
  return wave.shape === 'sum' ? wave.waves.flatMap(partsOf) : [wave];
}

function periodOf(wave: Wave): number | undefined {
  switch (wave.shape) {
    case 'constant':
      return 0;
    case 'points':
      return wave.repeat ? wave.times.at(-1)! - wave.times[0]! : undefined;
    case 'sum':
      return undefined;
    default:
      return wave.frequency > 0 ? 1 / wave.frequency : undefined;
  }
}

function isMultiple(long: number, short: number): boolean {
  const ratio = long / short;
  const whole = Math.round(ratio);
  return whole >= 1 && Math.abs(ratio - whole) <= RATIO_TOLERANCE * whole;
}

function seconds(value: number): string {
  return `${Number(value.toPrecision(9))} s`;
}
