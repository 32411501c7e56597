/** `npm run bench -- time-response`: CPU time, steps and Newton solves against error on the lamp circuit, beside general-purpose peers. */
import { solveLampExplicitly } from './explicit-lamp.ts';
import { chargeError, LAMP_CASES, solveLamp } from './lamp.ts';
import { runPeer } from './peers.ts';
import type { Report } from './report.ts';
import { cpuSeconds } from './timing.ts';

const ACCURACIES = [1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8];

interface Point {
  readonly error: number;
  readonly cpu: number;
  readonly steps: number;
}

export function benchTimeResponse(report: Report): void {
  const own = new Map<string, Point[]>();
  const peers = new Map<string, Point[]>();
  const add = (curves: Map<string, Point[]>, key: string, point: Point): void => {
    curves.set(key, [...(curves.get(key) ?? []), point]);
  };
  for (const lamp of LAMP_CASES) {
    for (const accuracy of ACCURACIES) {
      const outcome = solveLamp(lamp, accuracy);
      const cpu = cpuSeconds(() => solveLamp(lamp, accuracy));
      const error = chargeError(lamp.name, outcome.charges);
      add(own, lamp.name, { error, cpu, steps: outcome.steps });
      report.record({
        work: lamp.name,
        solver: 'ohmfolio',
        accuracy,
        cpu_s: cpu,
        steps: outcome.steps,
        rejected: outcome.rejected,
        newton: outcome.newton,
        error,
      });
    }
    for (const tolerance of [1e-4, 1e-6, 1e-8]) {
      const outcome = solveLampExplicitly(lamp, tolerance);
      const cpu = cpuSeconds(() => solveLampExplicitly(lamp, tolerance));
      const error = chargeError(lamp.name, outcome.charges);
      add(peers, `odex ${lamp.name}`, { error, cpu, steps: outcome.steps });
      report.record({
        work: lamp.name,
        solver: 'odex (npm)',
        accuracy: tolerance,
        cpu_s: cpu,
        steps: outcome.steps,
        evaluations: outcome.evaluations,
        error,
      });
    }
  }
  for (const [program, label, kept] of [
    ['radau', 'Radau IIA 5 (C)', 'own-radau5-nodal'],
    ['ida', 'IDA, multistep (C)', 'ida-dense-nodal'],
  ] as const) {
    const records = program === 'radau' ? runPeer(program, 0.06, 'bench') : runPeer(program, 0.06);
    if (typeof records === 'string') {
      report.remark(records);
      continue;
    }
    for (const record of records) {
      if (record.peer !== kept || !record.w.startsWith('W1') || record.fail) continue;
      const point = { error: Number(record.err), cpu: Number(record.cpu_s), steps: Number(record.steps) };
      add(peers, `${label} ${record.w}`, point);
      report.record({
        work: record.w,
        solver: label,
        accuracy: Number(record.rtol),
        cpu_s: point.cpu,
        steps: point.steps,
        rejected: Number(record.rej),
        newton: Number(record.newton),
        error: point.error,
      });
    }
  }
  for (const [key, curve] of peers) {
    const work = key.split(' ').at(-1)!;
    for (const { error, cpu, steps } of own.get(work)!) {
      const peer = atError(curve, error);
      if (!peer) continue;
      report.record({
        ratio: `to ${key.slice(0, -work.length - 1)} at equal error`,
        work,
        error,
        cpu: Number((cpu / peer.cpu).toPrecision(3)),
        steps: Number((steps / peer.steps).toPrecision(3)),
        ...(peer.beyond ? { note: 'peer extrapolated' } : {}),
      });
    }
  }
}

/** The peer's cost at an error: straight lines between its points, logarithmic both ways; the best that it did at no more error. */
function atError(points: readonly Point[], error: number): { cpu: number; steps: number; beyond: boolean } | undefined {
  // points that cost more and err more than another say nothing of the peer at its best
  const useful = points
    .filter((point) => !points.some((other) => other !== point && other.error <= point.error && other.cpu <= point.cpu))
    .sort((a, b) => b.error - a.error);
  if (useful.length < 2) return undefined;
  let k = useful.findIndex((point) => point.error <= error);
  const beyond = k <= 0;
  if (k < 0) k = useful.length - 1;
  if (k === 0) k = 1;
  const [from, to] = [useful[k - 1]!, useful[k]!];
  const fraction = Math.log(error / from.error) / Math.log(to.error / from.error);
  const along = (a: number, b: number): number => a * (b / a) ** fraction;
  return { cpu: along(from.cpu, to.cpu), steps: along(from.steps, to.steps), beyond };
}
