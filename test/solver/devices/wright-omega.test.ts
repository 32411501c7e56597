import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { wrightOmega } from '../../../solver/devices/wright-omega.ts';
import { expectNear, reference } from '../circuits.ts';

describe('wrightOmega', () => {
  // W(x) = ω(ln x): values of Lambert's W recomputed with 40 digits (test/references/04)
  test.each(reference('04-diode-and-resistor').lambert_w as [number, number][])('at ln %d', (x, w) => {
    // the logarithm of x is itself rounded: an error of ε |ln x| in z changes ω by the factor 1 / (1 + ω)
    const rounding = Number.EPSILON * (4 + Math.abs(Math.log(x)) / (1 + w));
    expectNear(wrightOmega(Math.log(x)), w, rounding);
  });

  test('ω(1) = 1 exactly; ω(0) is the omega constant; ω(1 + e) = e', () => {
    expect(wrightOmega(1)).toBe(1);
    // OEIS A030178
    expectNear(wrightOmega(0), 0.5671432904097838, 4e-16);
    expectNear(wrightOmega(1 + Math.E), Math.E, 4e-16);
  });

  test('satisfies its equation ω + ln ω = z everywhere', () => {
    fc.assert(
      fc.property(fc.double({ min: -700, max: 1e6, noNaN: true }), (z) => {
        const w = wrightOmega(z);
        expect(w).toBeGreaterThan(0);
        // what the residual of the equation says of ω: its relative error is residual / (1 + ω), over the rounding of the terms
        const residual = Math.abs(w + Math.log(w) - z) / (1 + w);
        expect(residual).toBeLessThanOrEqual((4 * Number.EPSILON * (1 + w + Math.abs(z))) / (1 + w));
      }),
      { numRuns: 5000, seed: 1, examples: [[-50], [-13], [-2], [1], [3], [-49.999], [1e-9]] },
    );
  });

  test('rises, also across the seams of its regions', () => {
    for (const seam of [-50, -13, -2, 1, 3, 1e20]) {
      const h = Math.abs(seam) * 1e-12;
      expect(wrightOmega(seam + h)).toBeGreaterThan(wrightOmega(seam - h));
      const jump = wrightOmega(seam + h) / wrightOmega(seam - h) - 1;
      // its relative slope is 1 / (1 + ω), at most 1; z itself is rounded
      expect(jump).toBeLessThanOrEqual(2 * h + Number.EPSILON * (2 + Math.abs(seam)));
    }
  });

  test('neither overflows nor becomes undefined', () => {
    expect(wrightOmega(1e300)).toBe(1e300);
    expect(wrightOmega(-1e300)).toBe(0);
    expect(wrightOmega(Number.NEGATIVE_INFINITY)).toBe(0);
  });
});
