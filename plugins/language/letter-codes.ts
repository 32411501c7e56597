/** Value codes of IEC 60062: a letter stands for the decimal sign and the multiplier (`4k7`, `R47`, `100n`, `4R7J`). */
import type { Tolerance } from './scalar.ts';

/** The components whose unit a letter code leaves out. */
export type CodedUnit = 'Ω' | 'F' | 'H';

/** Exponents of ten by letter. IEC 60062 prints K; k is the SI prefix and as clear. `L` is milli, for resistors alone. */
const MULTIPLIERS: { readonly [unit in CodedUnit]: { readonly [letter: string]: number } } = {
  Ω: { L: -3, m: -3, R: 0, k: 3, K: 3, M: 6, G: 9, T: 12 },
  F: { p: -12, n: -9, u: -6, µ: -6, μ: -6, m: -3, F: 0 },
  H: { n: -9, u: -6, µ: -6, μ: -6, m: -3, H: 0 },
};

/** Tolerance letters of IEC 60062, in percent. */
const TOLERANCE_LETTERS: { readonly [letter: string]: readonly [plus: number, minus: number] } = {
  E: [0.005, 0.005],
  L: [0.01, 0.01],
  P: [0.02, 0.02],
  W: [0.05, 0.05],
  B: [0.1, 0.1],
  C: [0.25, 0.25],
  D: [0.5, 0.5],
  F: [1, 1],
  G: [2, 2],
  H: [3, 3],
  J: [5, 5],
  K: [10, 10],
  M: [20, 20],
  N: [30, 30],
  Q: [30, 10],
  T: [50, 10],
  S: [50, 20],
  Z: [80, 20],
};

/** Below this capacitance a tolerance letter is absolute, in picofarad (IEC 60062). */
const SMALL_CAPACITANCE = 10e-12;
const SMALL_CAPACITANCE_LETTERS: { readonly [letter: string]: number } = {
  B: 0.1e-12,
  C: 0.25e-12,
  D: 0.5e-12,
  F: 1e-12,
  G: 2e-12,
};

export type LetterCode =
  | { readonly reading: 'value'; readonly value: number; readonly tolerance?: Tolerance }
  /** The last letter may be a tolerance or the unit. */
  | { readonly reading: 'ambiguous'; readonly value: number; readonly letter: string };

const CODE = /^(\d*)([A-Za-zµμ])(\d*)([A-Z])?$/;

/** Reads a letter code of a component whose unit is known, or nothing if the text is not one. */
export function parseLetterCode(text: string, unit: CodedUnit): LetterCode | undefined {
  const parts = CODE.exec(text);
  if (!parts) return undefined;
  const [, before = '', letter = '', after = '', toleranceLetter] = parts;
  if (before === '' && after === '') return undefined;
  if (!Object.hasOwn(MULTIPLIERS[unit], letter)) return undefined;
  // `100F` and `3H` are a number with its unit, not a code.
  if (letter === unit && after === '') return undefined;
  const value = Number(`${before || '0'}.${after || '0'}e${MULTIPLIERS[unit][letter]}`);
  if (toleranceLetter === undefined) return { reading: 'value', value };
  if (toleranceLetter === unit) return { reading: 'ambiguous', value, letter: toleranceLetter };
  const tolerance = toleranceOf(toleranceLetter, value, unit);
  return tolerance && { reading: 'value', value, tolerance };
}

function toleranceOf(letter: string, value: number, unit: CodedUnit): Tolerance | undefined {
  if (unit === 'F' && value < SMALL_CAPACITANCE && value > 0) {
    const absolute = SMALL_CAPACITANCE_LETTERS[letter];
    return absolute === undefined ? undefined : { plus: absolute / value, minus: -absolute / value };
  }
  const percent = Object.hasOwn(TOLERANCE_LETTERS, letter) ? TOLERANCE_LETTERS[letter] : undefined;
  return percent && { plus: percent[0] / 100, minus: -percent[1] / 100 };
}
