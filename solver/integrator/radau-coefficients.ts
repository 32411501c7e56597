/**
 * The three-stage Radau IIA method of order 5 (E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, 2nd edition, 1996,
 * tables IV.5.6 and section IV.8). The inverse of its coefficient matrix is brought to the real Jordan form
 * T⁻¹ A⁻¹ T = [[γ, 0, 0], [0, α, -β], [0, β, α]], so that a step costs one real and one complex system of size n.
 */
const ROOT6 = Math.sqrt(6);
const CUBE_ROOT3 = Math.cbrt(3);

/** Stage abscissae. */
export const C1 = (4 - ROOT6) / 10;
export const C2 = (4 + ROOT6) / 10;

/** Real eigenvalue of A⁻¹, and the pair α ± iβ. */
export const GAMMA = 3 + CUBE_ROOT3 * CUBE_ROOT3 - CUBE_ROOT3;
export const ALPHA = 3 + (CUBE_ROOT3 - CUBE_ROOT3 * CUBE_ROOT3) / 2;
export const BETA = (3 ** (5 / 6) + 3 ** (7 / 6)) / 2;

/** Rows of T. */
export const T = [
  [0.09123239487089295, -0.1412552950209542, -0.030029194105147424],
  [0.241717932707107, 0.20412935229379994, 0.3829421127572619],
  [0.966048182615093, 1, 0],
] as const;

/** Rows of T⁻¹. */
export const T_INVERSE = [
  [4.325579890063155, 0.33919925181580984, 0.5417705399358749],
  [-4.178718591551905, -0.32768282076106237, 0.47662355450055044],
  [-0.5028726349457868, 2.571926949855605, -0.5960392048282249],
] as const;

/** Weights of the stage increments in the embedded error estimate of order 3 (section IV.8, equation 8.18), times γ. */
export const ERROR_WEIGHTS = [-(13 + 7 * ROOT6) / 3, (-13 + 7 * ROOT6) / 3, -1 / 3] as const;

/** Lagrange weights that carry values at the three stages back to the start of the step. */
export const START_WEIGHTS = [
  ((0 - C2) * (0 - 1)) / ((C1 - C2) * (C1 - 1)),
  ((0 - C1) * (0 - 1)) / ((C2 - C1) * (C2 - 1)),
  ((0 - C1) * (0 - C2)) / ((1 - C1) * (1 - C2)),
] as const;
