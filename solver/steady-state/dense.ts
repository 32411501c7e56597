/** Small dense linear algebra for shooting. */

/** Columns that add less than this to what the earlier ones span are left out. */
const RANK_TOLERANCE = 1e-11;

/**
 * The least-squares solution of rows · x = right by Householder reflections with column pivoting (G. Golub, 1965); unknowns that the rows do not
 * determine are zero. Undefined where a number is not finite.
 */
export function solveLeastSquares(
  rows: readonly (readonly number[])[],
  right: readonly number[],
): Float64Array | undefined {
  const m = rows.length;
  const n = rows[0]?.length ?? 0;
  const a = rows.map((row) => Float64Array.from(row));
  const b = Float64Array.from(right);
  if (a.some((row) => row.some((value) => !Number.isFinite(value))) || b.some((value) => !Number.isFinite(value)))
    return undefined;
  const order = Array.from({ length: n }, (_, j) => j);
  const norm = (j: number, from: number): number => {
    let sum = 0;
    for (let i = from; i < m; i++) sum += a[i]![j]! ** 2;
    return Math.sqrt(sum);
  };
  let rank = 0;
  let largest = 0;
  for (let k = 0; k < Math.min(m, n); k++) {
    let best = k;
    let bestNorm = -1;
    for (let j = k; j < n; j++) {
      const size = norm(j, k);
      if (size > bestNorm) {
        best = j;
        bestNorm = size;
      }
    }
    if (k === 0) largest = bestNorm;
    if (!(bestNorm > RANK_TOLERANCE * largest)) break;
    if (best !== k) {
      for (const row of a) [row[k], row[best]] = [row[best]!, row[k]!];
      [order[k], order[best]] = [order[best]!, order[k]!];
    }
    const alpha = a[k]![k]! > 0 ? -bestNorm : bestNorm;
    const v = new Float64Array(m);
    for (let i = k; i < m; i++) v[i] = a[i]![k]!;
    v[k]! -= alpha;
    let square = 0;
    for (let i = k; i < m; i++) square += v[i]! ** 2;
    if (square > 0) {
      const reflect = (get: (i: number) => number, set: (i: number, value: number) => void): void => {
        let dot = 0;
        for (let i = k; i < m; i++) dot += v[i]! * get(i);
        const factor = (2 * dot) / square;
        for (let i = k; i < m; i++) set(i, get(i) - factor * v[i]!);
      };
      for (let j = k; j < n; j++)
        reflect(
          (i) => a[i]![j]!,
          (i, value) => {
            a[i]![j] = value;
          },
        );
      reflect(
        (i) => b[i]!,
        (i, value) => {
          b[i] = value;
        },
      );
    }
    rank++;
  }
  const x = new Float64Array(n);
  for (let k = rank - 1; k >= 0; k--) {
    let sum = b[k]!;
    for (let j = k + 1; j < rank; j++) sum -= a[k]![j]! * x[order[j]!]!;
    x[order[k]!] = sum / a[k]![k]!;
  }
  return x;
}

/** Solves multiply(x) = right by GMRES without restarts, to a relative residual, in at most `limit` multiplications. */
export function solveGmres(
  multiply: (x: Float64Array) => Float64Array,
  right: Float64Array,
  tolerance: number,
  limit: number,
): Float64Array {
  const n = right.length;
  const dot = (a: Float64Array, b: Float64Array): number => a.reduce((sum, value, i) => sum + value * b[i]!, 0);
  const beta = Math.sqrt(dot(right, right));
  const x = new Float64Array(n);
  if (beta === 0) return x;
  const basis = [right.map((value) => value / beta)];
  const columns: Float64Array[] = [];
  const cosines: number[] = [];
  const sines: number[] = [];
  const g = [beta];
  for (let k = 0; k < limit; k++) {
    const w = multiply(basis[k]!);
    const h = new Float64Array(k + 2);
    // modified Gram-Schmidt
    for (let j = 0; j <= k; j++) {
      h[j] = dot(w, basis[j]!);
      for (let i = 0; i < n; i++) w[i]! -= h[j]! * basis[j]![i]!;
    }
    const size = Math.sqrt(dot(w, w));
    h[k + 1] = size;
    for (let j = 0; j < k; j++) {
      const upper = cosines[j]! * h[j]! + sines[j]! * h[j + 1]!;
      h[j + 1] = -sines[j]! * h[j]! + cosines[j]! * h[j + 1]!;
      h[j] = upper;
    }
    const radius = Math.hypot(h[k]!, size);
    cosines[k] = radius === 0 ? 1 : h[k]! / radius;
    sines[k] = radius === 0 ? 0 : size / radius;
    h[k] = radius;
    g[k + 1] = -sines[k]! * g[k]!;
    g[k]! *= cosines[k]!;
    columns.push(h);
    if (Math.abs(g[k + 1]!) <= tolerance * beta || size === 0) break;
    basis.push(w.map((value) => value / size));
  }
  const y = new Float64Array(columns.length);
  for (let k = columns.length - 1; k >= 0; k--) {
    let sum = g[k]!;
    for (let j = k + 1; j < columns.length; j++) sum -= columns[j]![k]! * y[j]!;
    y[k] = columns[k]![k] === 0 ? 0 : sum / columns[k]![k]!;
  }
  columns.forEach((_, k) => {
    for (let i = 0; i < n; i++) x[i]! += y[k]! * basis[k]![i]!;
  });
  return x;
}
