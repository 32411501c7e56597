/**
 * The Wright omega function on the real line: the solution w of w + ln w = z. It gives the current of an exponential
 * junction behind a resistance in closed form, without the overflow that Lambert's W of exp(z) has.
 *
 * Method: a starting value by region, then steps of the fourth-order iteration of F. N. Fritsch, R. E. Shafer and
 * W. P. Crowley (1973), as P. W. Lawrence, R. M. Corless and D. J. Jeffrey apply it (ACM TOMS 38(3), 2012, alg. 917).
 */
export function wrightOmega(z: number): number {
  if (z < -50) return Math.exp(z);
  if (z > 1e20) return z;
  let w: number;
  if (z < -2) {
    const e = Math.exp(z);
    w = e * (1 - e * (1 - 1.5 * e));
    // the series' next term, 8/3 e⁴, is below rounding there
    if (z < -13) return w;
  } else if (z < 1) {
    // Taylor's series about z = 0, w = 0.5671...
    w = 0.5671432904097838 + z * (0.3618962566348892 + z * (0.0736731234206379 + z * -0.0013466));
  } else if (z < 3) {
    const x = z - 1;
    w = 1 + x * (0.5 + x * (0.0625 - x * 0.0052083));
  } else {
    const l = Math.log(z);
    w = z - l + (l / z) * (1 + (l - 2) / (2 * z));
  }
  for (let i = 0; i < 2; i++) {
    const residual = z - w - Math.log(w);
    const a = 1 + w;
    const b = a + (2 / 3) * residual;
    const change = ((residual / a) * (a * b - 0.5 * residual)) / (a * b - residual);
    w += w * change;
    // the iteration is of fourth order
    if (Math.abs(change) < 1e-4) break;
  }
  return w;
}
