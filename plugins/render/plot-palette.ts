/**
 * Colours of plots as style sheet variables, for light and dark pages. The series were chosen by search: all eight are told apart in
 * the three dichromacies, the first four well, and neighbours differ in lightness, so in grey too; each stands out from the page
 * and from shaded stretches. Dashes tell them apart besides.
 */
export interface Shade {
  readonly light: string;
  readonly dark: string;
}

export const PLOT_PALETTE: { readonly [variable: string]: Shade } = {
  '--plot-series-1': { light: '#2e6e82', dark: '#77daef' },
  '--plot-series-2': { light: '#8d0a03', dark: '#f07143' },
  '--plot-series-3': { light: '#83855f', dark: '#ddf4ac' },
  '--plot-series-4': { light: '#4c202b', dark: '#a16d79' },
  '--plot-series-5': { light: '#a4752b', dark: '#f4f077' },
  '--plot-series-6': { light: '#54539b', dark: '#a6b3f5' },
  '--plot-series-7': { light: '#30384d', dark: '#7d89a1' },
  '--plot-series-8': { light: '#0e9484', dark: '#aef1ed' },
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
