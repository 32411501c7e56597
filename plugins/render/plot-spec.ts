/** A plot as a Vega-Lite specification, colours standing in for style sheet variables. */
import type { Curve, SolvedPlot } from '../results.ts';
import { typographicWords } from './number-text.ts';
import { curveName, type DrawnPoint, drawnPoints, type Extent, extentOf } from './plot-data.ts';
import { DASHES, SERIES_COUNT } from './plot-palette.ts';

export const SCHEMA = 'https://vega.github.io/schema/vega-lite/v6.json';

/** Colours that are put in before drawing and replaced by variables after: one that occurs nowhere else for each. */
export const STAND_INS: { readonly [variable: string]: string } = {
  '--plot-series-1': '#010a01',
  '--plot-series-2': '#010a02',
  '--plot-series-3': '#010a03',
  '--plot-series-4': '#010a04',
  '--plot-series-5': '#010a05',
  '--plot-series-6': '#010a06',
  '--plot-series-7': '#010a07',
  '--plot-series-8': '#010a08',
  '--plot-text': '#010b01',
  '--plot-axis': '#010b02',
  '--plot-grid': '#010b03',
  '--plot-span': '#010b04',
};

export const FONT = 'Seravek, "Segoe UI", "Noto Sans", "Liberation Sans", Arial, sans-serif';

const QUANTITIES: { readonly [unit: string]: string } = {
  V: 'voltage',
  A: 'current',
  F: 'capacitance',
  H: 'inductance',
  S: 'conductance',
  '°C': 'temperature',
  K: 'temperature',
  W: 'power',
  C: 'charge',
  J: 'energy',
  Ω: 'resistance',
  Wb: 'flux',
  s: 'time',
  Hz: 'frequency',
};

export type Json = { readonly [key: string]: unknown };

export function plotSpecification(plot: SolvedPlot): Json {
  const names = seriesNames(plot.curves);
  const left = plot.curves.filter(({ side }) => side === 'left');
  const right = plot.curves.filter(({ side }) => side === 'right');
  const colour = {
    field: 'series',
    type: 'nominal',
    scale: { domain: names, range: names.map((_, k) => STAND_INS[`--plot-series-${(k % SERIES_COUNT) + 1}`]) },
    legend: names.length > 1 ? { title: null } : null,
  };
  const dash = {
    field: 'series',
    type: 'nominal',
    scale: { domain: names, range: names.map((_, k) => dashOf(k)) },
    legend: names.length > 1 ? { title: null } : null,
  };
  const drawn = new Map(plot.curves.map((curve) => [curve, drawnPoints(curve, plot)]));
  const across = extentOf([...drawn.values()].flatMap((points) => points.map(({ x }) => x)));
  const horizontal = {
    field: 'x',
    type: 'quantitative',
    scale: { zero: false, nice: false, ...levelDomain(across) },
    axis: { title: axisTitle(plot.horizontal.label, plot.horizontal.unit), grid: true, ...tickFormat(across) },
  };
  const lines = (curves: readonly Curve[], orient: 'left' | 'right'): Json => {
    const up = extentOf(curves.flatMap((curve) => drawn.get(curve)!.map(({ y }) => y)));
    return layerOf(curves, orient, up);
  };
  const layerOf = (curves: readonly Curve[], orient: 'left' | 'right', up: Extent | undefined): Json => ({
    data: {
      values: curves.flatMap((curve) =>
        drawn.get(curve)!.map(({ x, y }, order) => ({ x, y, series: names[plot.curves.indexOf(curve)], order })),
      ),
    },
    mark: {
      type: 'line',
      strokeWidth: 1.6,
      strokeJoin: 'round',
      invalid: 'break-paths-filter-domains',
      // a line of one point has no length to be seen by
      ...(curves.some((curve) => isOnePoint(drawn.get(curve)!)) ? { point: { filled: true, size: 30 } } : {}),
    },
    encoding: {
      x: horizontal,
      y: {
        field: 'y',
        type: 'quantitative',
        scale: { zero: false, ...levelDomain(up) },
        axis: {
          orient,
          ...tickFormat(up),
          title: axisTitle(quantityOf(curves), curves[0]!.unit),
          grid: orient === 'left' || left.length === 0,
        },
      },
      color: colour,
      strokeDash: dash,
      order: { field: 'order', type: 'quantitative' },
    },
  });
  const layers: Json[] = [];
  if (plot.spans.length > 0) layers.push(...spanLayers(plot));
  if (left.length > 0) layers.push(lines(left, 'left'));
  if (right.length > 0) layers.push(lines(right, 'right'));
  return {
    $schema: SCHEMA,
    ...(plot.block.title === undefined ? {} : { description: plot.block.title }),
    width: 620,
    height: 260,
    background: null,
    layer: layers,
    resolve: left.length > 0 && right.length > 0 ? { scale: { y: 'independent' } } : {},
    config: configFor(names),
  };
}

/** As many columns of the legend as its longest label leaves room for. */
function configFor(names: readonly string[]): Json {
  const longest = Math.max(...names.map((name) => name.length));
  const columns = longest > 44 ? 1 : longest > 24 ? 2 : 3;
  return { ...CONFIG, legend: { ...LEGEND, columns } };
}

const LEGEND: Json = {
  orient: 'bottom',
  symbolType: 'stroke',
  symbolSize: 320,
  symbolStrokeWidth: 1.8,
  labelFontSize: 11.5,
  labelColor: STAND_INS['--plot-text'],
  labelLimit: 0,
  titleLimit: 0,
  offset: 6,
};

const CONFIG: Json = {
  font: FONT,
  view: { stroke: null },
  // digits are not grouped, as in the tables
  locale: { number: { decimal: '.', thousands: '', grouping: [3], currency: ['', ''] } },
  axis: {
    labelFontSize: 11,
    titleFontSize: 11.5,
    titleFontWeight: 'normal',
    labelColor: STAND_INS['--plot-text'],
    titleColor: STAND_INS['--plot-text'],
    domainColor: STAND_INS['--plot-axis'],
    tickColor: STAND_INS['--plot-axis'],
    gridColor: STAND_INS['--plot-grid'],
    titleLimit: 0,
    labelLimit: 0,
    tickCount: 7,
  },
};

/** Stretches where a mark's condition holds, shaded over the whole height; the label stands above the plot, once a kind. */
function spanLayers(plot: SolvedPlot): Json[] {
  const scale = plot.horizontal.scale;
  const values = plot.spans.map(({ label, from, to }) => ({ from: from * scale, to: to * scale, label }));
  const from = Math.min(...plot.curves.map(({ waveform }) => waveform.grid[0]! * scale));
  const to = Math.max(...plot.curves.map(({ waveform }) => waveform.grid.at(-1)! * scale));
  // of each kind, the stretch that lies furthest from the ends has room for its label
  const room = (span: { readonly from: number; readonly to: number }): number =>
    Math.min((span.from + span.to) / 2 - from, to - (span.from + span.to) / 2);
  const labels = [...new Set(values.map(({ label }) => label))];
  const firsts = labels.map((label) =>
    values.filter((span) => span.label === label).reduce((best, span) => (room(span) > room(best) ? span : best)),
  );
  return [
    {
      data: { values },
      mark: { type: 'rect', color: STAND_INS['--plot-span'], opacity: 0.75 },
      encoding: { x: { field: 'from', type: 'quantitative' }, x2: { field: 'to' } },
    },
    {
      data: { values: firsts.map((span, k) => ({ ...span, row: -5 - 13 * k, middle: (span.from + span.to) / 2 })) },
      mark: {
        type: 'text',
        baseline: 'bottom',
        align: 'center',
        fontSize: 10.5,
        color: STAND_INS['--plot-text'],
        font: FONT,
      },
      encoding: {
        x: { field: 'middle', type: 'quantitative' },
        y: { field: 'row', type: 'quantitative', scale: null },
        text: { field: 'label', type: 'nominal' },
      },
    },
  ];
}

/** What was drawn before in a colour gets another dash when the colours are through. */
function dashOf(series: number): readonly number[] {
  return DASHES[(series + Math.floor(series / SERIES_COUNT)) % DASHES.length]!;
}

/** Room around a level line, whose range is nothing; where there is nothing at all, an axis to be seen. */
function levelDomain(extent: Extent | undefined): Json {
  if (extent === undefined) return { domain: [0, 1] };
  if (extent.least < extent.greatest) return {};
  const room = extent.least === 0 ? 1 : Math.abs(extent.least) / 10;
  return { domain: [extent.least - room, extent.least + room] };
}

/** Powers of ten where a unit was asked for that does not fit the values. */
function tickFormat(extent: Extent | undefined): Json {
  const size = extent === undefined ? 0 : Math.max(Math.abs(extent.least), Math.abs(extent.greatest));
  return size >= 1e5 || (size > 0 && size < 1e-3) ? { format: '~e' } : {};
}

function isOnePoint(points: readonly DrawnPoint[]): boolean {
  const seen = points.filter(({ y }) => y !== null);
  return seen.length > 0 && seen.every(({ x, y }) => x === seen[0]!.x && y === seen[0]!.y);
}

/** The form of ISO 80000-1: a quantity divided by its unit. */
function axisTitle(quantity: string, unit: string): string {
  return unit === '' ? quantity : `${quantity} / ${unit}`;
}

/** What the curves of an axis share: the label of a single one, else the quantity that their unit measures. */
function quantityOf(curves: readonly Curve[]): string {
  const labels = new Set(curves.map(({ label }) => label));
  if (labels.size === 1) return [...labels][0]!;
  const unit = curves[0]!.unit.replace(/^[TGMkmµnpfa](?=[A-ZΩ]|s$)/, '');
  return QUANTITIES[unit] ?? 'value';
}

/** Names in the legend, all different; with two axes, what is read on the right one says so. */
function seriesNames(curves: readonly Curve[]): string[] {
  const twoAxes = new Set(curves.map(({ side }) => side)).size > 1;
  const seen = new Map<string, number>();
  return curves.map((curve) => {
    const name = typographicWords(curveName(curve)) + (twoAxes && curve.side === 'right' ? ' (right axis)' : '');
    const count = (seen.get(name) ?? 0) + 1;
    seen.set(name, count);
    return count === 1 ? name : `${name} (${count})`;
  });
}
