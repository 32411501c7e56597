/**
 * Colours of plots as style sheet variables, for light and dark pages. The series are ordered so that neighbours differ in lightness as well as in
 * hue: they are told apart in grey and by readers with the common colour blindnesses; dashes tell them apart besides.
 */
export interface Shade {
  readonly light: string;
  readonly dark: string;
}

export const PLOT_PALETTE: { readonly [variable: string]: Shade } = {
  '--plot-series-1': { light: '#0b4f6c', dark: '#8ecae6' },
  '--plot-series-2': { light: '#b3541e', dark: '#f0a36b' },
  '--plot-series-3': { light: '#4a7c3a', dark: '#a9d18e' },
  '--plot-series-4': { light: '#7b2d5e', dark: '#e29bc7' },
  '--plot-series-5': { light: '#8a6d00', dark: '#e3c85b' },
  '--plot-series-6': { light: '#4f5bb0', dark: '#aab4f5' },
  '--plot-series-7': { light: '#5b5f66', dark: '#c2c7cd' },
  '--plot-series-8': { light: '#12756b', dark: '#6fd3c7' },
  '--plot-text': { light: '#1c2126', dark: '#e4e6e3' },
  '--plot-axis': { light: '#6b747c', dark: '#8d969d' },
  '--plot-grid': { light: '#e3e5e2', dark: '#2c343b' },
  '--plot-span': { light: '#e9ecdf', dark: '#29322c' },
};

/** Dash patterns of the series, in turn; the first is a solid line. */
export const DASHES: readonly (readonly number[])[] = [
  [],
  [7, 3],
  [2, 2],
  [9, 3, 2, 3],
  [5, 2],
  [1, 2],
  [12, 3],
  [4, 2, 1, 2],
];

export const SERIES_COUNT = 8;
