/** Diagonally implicit Runge-Kutta methods that were compared with the one in use. */
export interface Tableau {
  readonly name: string;
  readonly order: number;
  /** Order of the embedded formula. */
  readonly embeddedOrder: number;
  /** Rows of the coefficient matrix, lower triangular; the last row is the weights (stiffly accurate). */
  readonly a: readonly (readonly number[])[];
  readonly embedded: readonly number[];
}

const D = (2 - Math.SQRT2) / 2;
const W = Math.SQRT2 / 4;

/** Trapezoidal rule and second-order backward differences in one step (R. E. Bank et al., 1985; weights after M. E. Hosea and L. F. Shampine, 1996). */
export const TR_BDF2: Tableau = {
  name: 'TR-BDF2',
  order: 2,
  embeddedOrder: 3,
  a: [[0], [D, D], [W, W, D]],
  embedded: [(1 - W) / 3, (3 * W + 1) / 3, D / 3],
};

/** Five stages, order 4, L-stable (E. Hairer and G. Wanner, Solving Ordinary Differential Equations II, table IV.6.5). */
export const SDIRK4: Tableau = {
  name: 'SDIRK 4',
  order: 4,
  embeddedOrder: 3,
  a: [
    [1 / 4],
    [1 / 2, 1 / 4],
    [17 / 50, -1 / 25, 1 / 4],
    [371 / 1360, -137 / 2720, 15 / 544, 1 / 4],
    [25 / 24, -49 / 48, 125 / 16, -85 / 12, 1 / 4],
  ],
  embedded: [59 / 48, -17 / 96, 225 / 32, -85 / 12, 0],
};
