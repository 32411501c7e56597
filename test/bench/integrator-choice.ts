/** `npm run bench -- integrator-choice`: the measurement by which the integrator was chosen, on the lamp circuit. */
import { solveLampDiagonally } from './integrators/diagonal.ts';
import { SDIRK4, TR_BDF2 } from './integrators/tableaux.ts';
import { chargeError, LAMP_CASES, solveLamp } from './lamp.ts';
import { runPeer } from './peers.ts';
import type { Report } from './report.ts';

export function benchIntegratorChoice(report: Report): void {
  for (const lamp of LAMP_CASES) {
    for (const tolerance of [1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8]) {
      for (const tableau of [TR_BDF2, SDIRK4]) {
        const { charges, steps, rejected, solves } = solveLampDiagonally(lamp, tableau, tolerance);
        report.record({
          work: lamp.name,
          method: tableau.name,
          tolerance,
          steps,
          rejected,
          solves,
          error: chargeError(lamp.name, charges),
        });
      }
      const { charges, steps, rejected, newton } = solveLamp(lamp, tolerance);
      report.record({
        work: lamp.name,
        method: 'Radau IIA 5',
        tolerance,
        steps,
        rejected,
        solves: newton,
        error: chargeError(lamp.name, charges),
      });
    }
  }
  const records = runPeer('ida', 0.01);
  if (typeof records === 'string') {
    report.remark(records);
    return;
  }
  for (const record of records) {
    if (record.peer !== 'ida-dense-nodal' || !record.w.startsWith('W1')) continue;
    report.record({
      work: record.w,
      method: 'BDF, order 1 to 5',
      tolerance: Number(record.rtol),
      steps: Number(record.steps),
      rejected: Number(record.rej),
      solves: Number(record.newton),
      error: Number(record.err),
    });
  }
}
