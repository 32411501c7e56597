/** What a source does over time: plain data, SI units (volt or ampere, seconds, hertz, radian). */
export type Wave =
  | { readonly shape: 'constant'; readonly value: number }
  /** offset + peak sin(2π frequency (t - delay) + phase) from `delay` on, its first value before. */
  | {
      readonly shape: 'sine';
      readonly peak: number;
      readonly frequency: number;
      readonly offset: number;
      readonly phase: number;
      readonly delay: number;
    }
  /** Starts at the middle, rising; held at the middle before `delay`. */
  | {
      readonly shape: 'triangle';
      readonly low: number;
      readonly high: number;
      readonly frequency: number;
      readonly delay: number;
    }
  /** Rises from `low` to `high` in all but the fraction `fall` of the period, which the return takes. */
  | {
      readonly shape: 'ramp';
      readonly low: number;
      readonly high: number;
      readonly frequency: number;
      readonly fall: number;
      readonly delay: number;
    }
  /** `low` before `delay`; then rise, `width` at `high` (without the edges), fall, every period; `frequency` 0: once. */
  | {
      readonly shape: 'pulse';
      readonly low: number;
      readonly high: number;
      readonly frequency: number;
      readonly width: number;
      readonly rise: number;
      readonly fall: number;
      readonly delay: number;
    }
  /** Straight lines through the points; two points at one time are a jump; held beyond the ends, or repeated. */
  | {
      readonly shape: 'points';
      readonly times: readonly number[];
      readonly values: readonly number[];
      readonly repeat: boolean;
    }
  | { readonly shape: 'sum'; readonly waves: readonly Wave[] };
