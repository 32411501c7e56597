/** The solver's one door: a checked circuit and a request in, a solution out. */
import type { AnalysisRequest, Audit, Effort, Solution } from './analysis.ts';
import { auditSolution } from './audit.ts';
import { traceCharacteristic } from './characteristic.ts';
import type { Circuit } from './circuit.ts';
import { buildSystem } from './equations/build-system.ts';
import { findOperatingPoint } from './operating-point.ts';
import { settle } from './steady-state/settled-waves.ts';
import { findSteadyState } from './steady-state/shooting.ts';
import { marchInTime } from './time-response.ts';
import { segmentAt, waveCorners } from './wave-evaluation.ts';

/** Grows whenever a change in the solver may change a figure. */
export const SOLVER_VERSION = '1';

/**
 * Solves the analysis. `accuracy` is the relative accuracy that figures drawn from the solution are meant to keep.
 * Throws `NoSolution` where there is none to be found.
 */
export function solve(asked: Circuit, request: AnalysisRequest, accuracy: number): Solution {
  const circuit = request.find === 'steady state' ? settle(asked) : asked;
  const system = buildSystem(circuit);
  const effort: Effort = { steps: 0, rejectedSteps: 0, newtonIterations: 0, factorisations: 0, events: 0 };
  const remarks = new Set<string>();
  for (const drive of [...system.drives, ...system.driven]) {
    const next = waveCorners(drive.wave, 0, Number.POSITIVE_INFINITY, 1)[0];
    drive.segment = segmentAt(drive.wave, next === undefined ? 1 : next / 2);
  }
  for (const { nodes } of system.islands) {
    const starts = request.find === 'time response' && request.start !== 'operating point';
    if (!starts) remarks.add(`no direct current reaches ${nodes.join(', ')}: taken as uncharged before the start`);
  }
  const recorder = ((): { grid: Float64Array; unknowns: Float64Array; modes: Int8Array } => {
    switch (request.find) {
      case 'operating point': {
        const y = new Float64Array(system.vectorLength);
        findOperatingPoint(system, y, { analysis: request.find, t: 0, effort, remarks });
        const unknowns = new Float64Array(4 * system.size);
        for (let s = 0; s < 4; s++) unknowns.set(y.subarray(0, system.size), s * system.size);
        return { grid: Float64Array.of(0, 0), unknowns, modes: system.modes.slice() };
      }
      case 'characteristic':
        return trim(traceCharacteristic(system, request, accuracy, effort, remarks));
      case 'time response':
        return trim(marchInTime(system, request, accuracy, effort, remarks).recorder);
      case 'steady state':
        return trim(findSteadyState(system, request, accuracy, effort, remarks));
    }
  })();
  const solution = {
    circuit,
    request,
    ...recorder,
    unknownNames: system.names,
    junctionLeak: system.junctionLeak.siemens,
    effort,
    audit: NOT_AUDITED,
    remarks: [...remarks],
  };
  return { ...solution, audit: auditSolution(solution) };
}

const NOT_AUDITED: Audit = { kirchhoff: 0, tellegen: 0 };

function trim(recorder: {
  size: number;
  modal: number;
  steps: number;
  grid: Float64Array;
  unknowns: Float64Array;
  modes: Int8Array;
}): { grid: Float64Array; unknowns: Float64Array; modes: Int8Array } {
  const { steps, size, modal } = recorder;
  return {
    grid: recorder.grid.slice(0, steps + 1),
    unknowns: recorder.unknowns.slice(0, 4 * steps * size),
    modes: recorder.modes.slice(0, steps * modal),
  };
}
