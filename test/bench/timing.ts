/** CPU time of a piece of work: warmed up, the median of several batches. */

/** Seconds of CPU that one measurement may take. */
const BUDGET = 0.6;

export function cpuSeconds(work: () => void): number {
  const once = (): number => {
    const before = process.cpuUsage();
    work();
    const { user, system } = process.cpuUsage(before);
    return (user + system) / 1e6;
  };
  // the compiler needs to have seen the work a few times
  let warm = 0;
  let last = 0;
  while (warm < BUDGET) {
    last = once();
    warm += last;
  }
  const batches = Math.max(3, Math.min(15, Math.round(BUDGET / Math.max(last, 1e-4))));
  const times = Array.from({ length: batches }, once).sort((a, b) => a - b);
  return times[times.length >> 1]!;
}
