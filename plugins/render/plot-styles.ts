/** The stylesheet's part for plots: the palette's variables, light, dark and printed. */
import { PLOT_PALETTE } from './plot-palette.ts';

export function plotStyles(): string {
  const block = (theme: 'light' | 'dark'): string =>
    Object.entries(PLOT_PALETTE)
      .map(([name, colours]) => `${name}:${colours[theme]}`)
      .join(';');
  return `:root{${block('light')}}@media screen and (prefers-color-scheme:dark){:root{${block('dark')}}}`;
}
