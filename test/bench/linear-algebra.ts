/** `npm run bench -- linear-algebra`: factorising again and solving, on ladders and grids, beside KLU. */
import { analyseAndFactorise, factorise, solveFactored } from '../../solver/linear/factors.ts';
import { buildPattern, type Pattern, slotOf } from '../../solver/linear/pattern.ts';
import { runPeer } from './peers.ts';
import type { Report } from './report.ts';
import { cpuSeconds } from './timing.ts';

/** A network of equal resistors with a small conductance to the reference at each node, so that it is regular. */
function network(
  nodes: number,
  edges: readonly (readonly [number, number])[],
): { pattern: Pattern; values: Float64Array } {
  const positions: [number, number][] = [];
  for (let i = 0; i < nodes; i++) positions.push([i, i]);
  for (const [a, b] of edges) positions.push([a, b], [b, a]);
  const pattern = buildPattern(nodes, positions);
  const values = new Float64Array(pattern.column.length);
  for (let i = 0; i < nodes; i++) values[slotOf(pattern, i, i)] = 1e-3;
  for (const [a, b] of edges) {
    values[slotOf(pattern, a, a)]! += 1;
    values[slotOf(pattern, b, b)]! += 1;
    values[slotOf(pattern, a, b)]! -= 1;
    values[slotOf(pattern, b, a)]! -= 1;
  }
  return { pattern, values };
}

function ladder(n: number): [number, number][] {
  return Array.from({ length: n - 1 }, (_, k): [number, number] => [k, k + 1]);
}

function grid(k: number): [number, number][] {
  const edges: [number, number][] = [];
  for (let row = 0; row < k; row++) {
    for (let column = 0; column < k; column++) {
      const at = row * k + column;
      if (column + 1 < k) edges.push([at, at + 1]);
      if (row + 1 < k) edges.push([at, at + k]);
    }
  }
  return edges;
}

export function benchLinearAlgebra(report: Report): void {
  const own = new Map<string, number>();
  const cases: [string, number, [number, number][]][] = [
    ...[10, 100, 1000, 10_000].map((n): [string, number, [number, number][]] => ['ladder', n, ladder(n)]),
    ...[10, 50, 100].map((k): [string, number, [number, number][]] => ['grid', k * k, grid(k)]),
  ];
  for (const [shape, n, edges] of cases) {
    const { pattern, values } = network(n, edges);
    const started = process.cpuUsage();
    const factors = analyseAndFactorise(pattern, values);
    const { user, system } = process.cpuUsage(started);
    if ('singular' in factors) throw new Error('a regular network was found singular');
    const x = new Float64Array(n + 1);
    const repeats = Math.max(1, Math.round(20_000 / n));
    const cpu =
      cpuSeconds(() => {
        for (let k = 0; k < repeats; k++) {
          factorise(factors, values);
          x.fill(1);
          solveFactored(factors, x);
        }
      }) / repeats;
    own.set(`${shape} ${n}`, cpu);
    report.record({
      work: 'W8',
      solver: 'ohmfolio',
      shape,
      n,
      analyse_s: (user + system) / 1e6,
      cpu_s: cpu,
      fill: factors.lower.length + factors.upper.length + n,
    });
  }
  const records = runPeer('linear', 0.06);
  if (typeof records === 'string') {
    report.remark(records);
    return;
  }
  const peer = new Map<string, number>();
  for (const record of records) {
    if (record.w !== 'W8' || (record.step !== 'refactor' && record.step !== 'solve')) continue;
    const key = `${record.shape} ${record.n}`;
    peer.set(key, (peer.get(key) ?? 0) + Number(record.cpu_s));
  }
  for (const [key, cpu] of peer) {
    const ours = own.get(key);
    const [shape, n] = key.split(' ');
    report.record({ work: 'W8', solver: 'KLU (C)', shape: shape!, n: Number(n), cpu_s: cpu });
    if (ours !== undefined)
      report.record({
        ratio: 'to KLU (C)',
        work: 'W8',
        shape: shape!,
        n: Number(n),
        cpu: Number((ours / cpu).toPrecision(3)),
      });
  }
}
