/** Drawings of plots. Shapes are checked on hand-made waveforms. */
import { describe, expect, test } from 'vitest';
import { renderPlot } from '../../../plugins/render/plot.ts';
import { drawnPoints } from '../../../plugins/render/plot-data.ts';
import { PLOT_PALETTE } from '../../../plugins/render/plot-palette.ts';
import { plotSpecification } from '../../../plugins/render/plot-spec.ts';
import { plotCsv, valueTable } from '../../../plugins/render/plot-table.ts';
import type { Curve, SolvedPlot } from '../../../plugins/results.ts';
import { unbalanced } from './notes.ts';

/** A polyline through the points as a waveform: values at the start, three nodes and the end of every step lie on its lines. */
function polyline(points: readonly (readonly [number, number])[]): Curve['waveform'] {
  const grid = Float64Array.from(points, ([x]) => x);
  const values = new Float64Array(4 * (points.length - 1));
  // the nodes of the three-stage Radau IIA method: E. Hairer, G. Wanner, Solving ODEs II, table IV.5.6
  const nodes = [0, (4 - Math.sqrt(6)) / 10, (4 + Math.sqrt(6)) / 10, 1];
  for (let k = 0; k + 1 < points.length; k++) {
    const [from, to] = [points[k]![1], points[k + 1]![1]];
    for (const [s, node] of nodes.entries()) values[4 * k + s] = from + node * (to - from);
  }
  return { grid, values };
}

function curve(label: string, points: readonly (readonly [number, number])[], more: Partial<Curve> = {}): Curve {
  return { label, unit: 'V', scale: 1, side: 'left', conditions: [], waveform: polyline(points), ...more };
}

function plotOf(curves: readonly Curve[], more: Partial<SolvedPlot['block']> = {}): SolvedPlot {
  return {
    block: {
      kind: 'plot',
      name: 'plot',
      line: 1,
      endLine: 5,
      source: '',
      from: 'period',
      lines: [],
      right: [],
      marks: [],
      title: 'One period',
      ...more,
    },
    horizontal: { label: 'time', unit: 'ms', scale: 1000 },
    curves,
    spans: [],
  };
}

const TRIANGLE = [
  [0, 0],
  [0.005, 10],
  [0.015, -10],
  [0.02, 0],
] as const;

describe('a drawing', () => {
  test('is the same bytes each time, whatever was drawn before', async () => {
    const plot = plotOf([curve('a', TRIANGLE)]);
    const first = await renderPlot(plot, { id: 'p' });
    await renderPlot(plotOf([curve('b', TRIANGLE), curve('c', TRIANGLE)]), { id: 'q' });
    expect(await renderPlot(plot, { id: 'p' })).toEqual(first);
  });

  test('is an image with a title and a description, and ids of its own', async () => {
    const { svg, description } = await renderPlot(plotOf([curve('a', TRIANGLE)]), { id: 'plot_x' });
    expect(svg).toMatch(/^<svg [^>]*role="img" aria-labelledby="plot_x-title plot_x-desc">/);
    expect(svg).toContain('<title id="plot_x-title">One period</title>');
    expect(description).toBe('A curve over time: a from \u221210 V to 10 V.');
    // each part would be read out by itself
    expect(svg.replace(/^<svg[^>]*>/, '')).not.toMatch(/ (role|aria-[a-z]+)=/);
    for (const [, id] of svg.matchAll(/\bid="([^"]*)"/g)) expect(id).toMatch(/^plot_x-/);
    for (const [, id] of svg.matchAll(/url\(#([^)]*)\)/g)) expect(svg).toContain(`id="${id}"`);
    expect(unbalanced(svg)).toBeUndefined();
  });

  test('takes its colours from the style sheet, and has no background', async () => {
    const { svg, spec } = await renderPlot(plotOf([curve('a', TRIANGLE), curve('b', TRIANGLE)]), { id: 'p' });
    expect(svg).toContain('stroke="var(--plot-series-1, ');
    expect(svg).toContain('stroke="var(--plot-series-2, ');
    for (const [, colour] of svg.matchAll(/(?:fill|stroke)="([^"]*)"/g)) {
      expect(colour).toMatch(/^(var\(--plot-[a-z0-9-]+, #[0-9a-f]{6}\)|none|transparent)$/);
    }
    // the specification stands alone: real colours
    expect(JSON.stringify(spec)).toContain(PLOT_PALETTE['--plot-series-1']!.light);
    expect(JSON.stringify(spec)).not.toMatch(/var\(|#010[ab]0/);
  });

  test('has quantities with their units on the axes', async () => {
    const current = curve('current', TRIANGLE, { side: 'right', unit: 'mA', scale: 1000 });
    const { svg, warnings } = await renderPlot(plotOf([curve('a', TRIANGLE), curve('b', TRIANGLE), current]), {
      id: 'p',
    });
    for (const words of ['time / ms', 'voltage / V', 'current / mA', 'current (right axis)']) {
      expect(svg).toContain(`>${words}</text>`);
    }
    expect(warnings).toEqual([]);
  });

  test('tells curves apart without colour, and names each in the legend without cutting it', async () => {
    const long = 'a label that is far longer than the hundred and sixty pixels that a legend grants by itself';
    const family = ['470 nF', '1 µF'].map((text, k) =>
      curve(long, TRIANGLE, { conditions: [{ name: 'C1', text, value: k }] }),
    );
    const { svg } = await renderPlot(plotOf(family), { id: 'p' });
    expect(svg).toContain(`>${long}, C1 = 470 nF</text>`);
    expect(svg).toContain(`>${long}, C1 = 1 µF</text>`);
    expect(svg).toContain('stroke-dasharray="7,3"');
  });

  test('shades stretches and says what they are', async () => {
    const plot = { ...plotOf([curve('a', TRIANGLE)]), spans: [{ label: 'dead', from: 0.004, to: 0.006 }] };
    const { svg, description } = await renderPlot(plot, { id: 'p' });
    expect(svg).toContain('fill="var(--plot-span, ');
    expect(svg).toContain('>dead</text>');
    expect(description).toContain('Shaded: dead.');
  });

  test('what an author writes is text', async () => {
    const hostile = '<script>alert(1)</script>" onload="x" & \'';
    const plot = {
      ...plotOf([curve(hostile, TRIANGLE, { unit: '<b>' }), curve('b', TRIANGLE)], { title: hostile }),
      spans: [{ label: hostile, from: 0, to: 0.001 }],
    };
    const { svg } = await renderPlot(plot, { id: 'p' });
    expect(svg).not.toMatch(/<script|<b>/);
    for (const [tag] of svg.matchAll(/<[a-z][^>]*>/g)) expect(tag).not.toMatch(/\sonload=/);
    expect(unbalanced(svg)).toBeUndefined();
  });

  test('ends neither a section of characters nor a style, and a label may look like an address', async () => {
    const hostile = ']]></svg><style>*{display:none}</style> url(https://example.org/) #010a01';
    const { svg } = await renderPlot(plotOf([curve(hostile, TRIANGLE), curve('b', TRIANGLE)], { title: hostile }), {
      id: 'p',
    });
    expect(svg).not.toMatch(/]]><|<style|<\/svg>.*<\/svg>/);
    expect(svg).toContain('#010a01</text>');
    expect(unbalanced(svg)).toBeUndefined();
  });

  test('loads nothing and runs nothing', async () => {
    const plot = { ...plotOf([curve('a', TRIANGLE)]), spans: [{ label: 'dead', from: 0, to: 0.001 }] };
    const { svg } = await renderPlot(plot, { id: 'p' });
    expect(svg).not.toMatch(/<script|<image|<foreignObject|href=|url\((?!#)|\son[a-z]+=/);
  });

  test('curves of one colour differ in their dashes', async () => {
    const many = Array.from({ length: 20 }, (_, k) => curve(`curve ${k}`, TRIANGLE));
    const { svg } = await renderPlot(plotOf(many), { id: 'p' });
    const looks = new Map<string, number>();
    for (const [path] of svg.matchAll(/<path[^>]*stroke-width="1.6"[^>]*>/g)) {
      const look = `${/stroke="[^"]*"/.exec(path)} ${/stroke-dasharray="[^"]*"/.exec(path)}`;
      looks.set(look, (looks.get(look) ?? 0) + 1);
    }
    expect([...looks.values()]).toEqual(Array(20).fill(1));
  });

  test.each([
    [
      'a level line',
      [
        [0, 5],
        [0.02, 5],
      ],
      'at 5 V',
    ],
    [
      'zero throughout',
      [
        [0, 0],
        [0.02, 0],
      ],
      'at 0 V',
    ],
    [
      'a single point',
      [
        [0.01, 5],
        [0.01, 5],
      ],
      'at 5 V',
    ],
    [
      'very small values',
      [
        [0, 0],
        [0.02, 1e-12],
      ],
      'from 0 V to 1·10⁻¹² V',
    ],
    [
      'very large values',
      [
        [0, -1e12],
        [0.02, 1e12],
      ],
      'from \u22121·10¹² V to 1·10¹² V',
    ],
  ] as const)('%s has axes that can be read', async (_, points, words) => {
    const { svg, description, warnings } = await renderPlot(plotOf([curve('a', points)]), { id: 'p' });
    expect(description).toBe(`A curve over time: a ${words}.`);
    expect(warnings).toEqual([]);
    const texts = [...svg.matchAll(/<text[^>]*>([^<]*)<\/text>/g)].map(([, text]) => text!);
    expect(texts.length).toBeGreaterThan(8);
    // neither a row of zeros nor a power in the notation of programs
    for (const text of texts) expect(text).not.toMatch(/\d{6}|\de[+-]/);
    // the line itself, or a dot: a line of one point has no length
    const drawing =
      points[0][0] === points[1][0]
        ? /<path[^>]*d="M[^"]*A[^"]*"[^>]*fill="var\(--plot-series-1/
        : /<path[^>]*d="M[^"]*L[^"]*"[^>]*stroke="var\(--plot-series-1/;
    expect(svg).toMatch(drawing);
  });

  test('a curve without a single value leaves an empty plot', async () => {
    const nothing = curve('a', TRIANGLE, {
      waveform: { grid: Float64Array.of(0, 1), values: new Float64Array(4).fill(Number.NaN) },
    });
    const { svg, description, warnings, csv } = await renderPlot(plotOf([nothing]), { id: 'p' });
    expect(description).toBe('A curve over time: a without a value.');
    expect(warnings).toEqual([]);
    expect(svg).not.toContain('NaN');
    expect(csv).not.toContain('NaN');
  });

  test('is described with digits that matter', async () => {
    const curves = [
      curve('a', [
        [0, -1e-11],
        [1, 7.83333],
      ]),
      curve('b', [
        [0, 4.90244],
        [1, 5],
      ]),
      curve('c', [
        [0, 5],
        [1, 5.00002],
      ]),
    ];
    const { description } = await renderPlot(plotOf(curves), { id: 'p' });
    expect(description).toBe(
      '3 curves over time: a from 0 V to 7.833 V; b from 4.902 V to 5 V; c from 5 V to 5.00002 V.',
    );
  });

  test('many curves are described by their families', async () => {
    const family = Array.from({ length: 9 }, (_, k) =>
      curve(
        'v',
        [
          [0, 0],
          [1, k + 1],
        ],
        { conditions: [{ name: 'C1', text: `${k + 1} µF`, value: k }] },
      ),
    );
    const { description } = await renderPlot(plotOf(family), { id: 'p' });
    expect(description).toBe('9 curves over time: v, from C1 = 1 µF to C1 = 9 µF, from 0 V to 9 V.');
  });

  test('curves that do not exist everywhere are interrupted', async () => {
    const { grid, values } = polyline(TRIANGLE);
    values.fill(Number.NaN, 4, 8);
    const broken = curve('a', TRIANGLE, { waveform: { grid, values } });
    const points = drawnPoints(broken, plotOf([broken]));
    expect(points.some(({ y }) => y === null)).toBe(true);
    const { svg } = await renderPlot(plotOf([broken]), { id: 'p' });
    expect(svg).not.toContain('NaN');
  });
});

describe('properties of the author', () => {
  test('are merged: sizes, axes of every curve, layers on top', async () => {
    const vega = {
      height: 90,
      encoding: { x: { axis: { format: '.3f' } } },
      mark: { strokeWidth: 5 },
      layer: [{ data: { values: [{ y: 5 }] }, mark: 'rule', encoding: { y: { field: 'y', type: 'quantitative' } } }],
    };
    const { svg, spec } = await renderPlot(plotOf([curve('a', TRIANGLE)], { vega }), { id: 'p' });
    expect(spec.height).toBe(90);
    expect(svg).toContain('stroke-width="5"');
    expect(svg).toMatch(/>4\.000<\/text>/);
    expect((spec.layer as unknown[]).length).toBe(2);
  });

  test('that cannot be drawn are refused with a reason', async () => {
    await expect(renderPlot(plotOf([curve('a', TRIANGLE)], { vega: { layer: [5] } }), { id: 'p' })).rejects.toThrow();
  });

  test.each([
    ['a text among conditions', { encoding: { color: { condition: { test: { and: ['warn(1)'] }, value: 'red' } } } }],
    [
      'a text as a condition',
      { encoding: { x: { axis: { labelColor: { condition: { test: '1', value: 'red' } } } } } },
    ],
    ['a text negated', { encoding: { opacity: { condition: { test: { or: [{ not: 'warn(1)' }] }, value: 1 } } } }],
    ['a function as a format', { encoding: { x: { axis: { formatType: 'warn' } } } }],
    ['functions as formats', { config: { customFormatTypes: true } }],
    ['a format of data', { layer: [{ data: { values: [], format: { parse: { y: "date:'%d'+warn(1)+'" } } } }] }],
    ['a part of a date', { encoding: { x: { axis: { values: [{ year: 'warn(1)' }] } } } }],
    ['a step', { encoding: { x: { timeUnit: { unit: 'year', step: 'warn(1)' } } } }],
    ['a colour from elsewhere', { title: { text: 'a', color: 'url(https://example.org/a.svg#b)' } }],
    [
      'a colour from elsewhere in data',
      {
        layer: [
          {
            data: { values: [{ c: 'url(//example.org/a.svg#b)', y: 5 }] },
            mark: 'rule',
            encoding: {
              y: { field: 'y', type: 'quantitative' },
              color: { field: 'c', type: 'nominal', scale: null },
            },
          },
        ],
      },
    ],
  ])('that would run code or open an address are refused: %s', async (_, vega) => {
    await expect(renderPlot(plotOf([curve('a', TRIANGLE)], { vega }), { id: 'p' })).rejects.toThrow(
      /is refused here|opens an address/,
    );
  });

  test('with conditions on fields are drawn', async () => {
    const vega = {
      encoding: {
        opacity: {
          condition: {
            test: {
              and: [
                { field: 'x', lt: 5 },
                { field: 'y', gt: 0 },
              ],
            },
            value: 0.5,
          },
          value: 1,
        },
      },
      layer: [
        {
          data: { values: [{ y: 5, parse: 'free (text)', step: 'a+b' }] },
          mark: 'rule',
          encoding: { y: { field: 'y', type: 'quantitative' } },
        },
      ],
    };
    const { warnings } = await renderPlot(plotOf([curve('a', TRIANGLE)], { vega }), { id: 'p' });
    expect(warnings).toEqual([]);
  });

  test('cannot change what all plots share', () => {
    const vega = JSON.parse('{"config": {"__proto__": {"polluted": 1}}}') as { [key: string]: unknown };
    plotSpecification(plotOf([curve('a', TRIANGLE)], { vega }));
    expect(({} as { polluted?: number }).polluted).toBeUndefined();
  });
});

describe('the numbers of a plot', () => {
  test('long curves are thinned with their extremes kept', () => {
    const points = Array.from({ length: 20_001 }, (_, k): [number, number] => [k / 20_000, Math.sin(k / 7)]);
    points[12_345]![1] = 40;
    points[17_001]![1] = -30;
    const drawn = drawnPoints(curve('a', points), plotOf([curve('a', points)]));
    expect(drawn.length).toBeLessThan(1500);
    const values = drawn.map(({ y }) => y!);
    expect(Math.max(...values)).toBe(40);
    expect(Math.min(...values)).toBe(-30);
  });

  test('CSV: heads with units, values in these units, lines end as RFC 4180 says', () => {
    const plot = plotOf([curve('a, "b"', TRIANGLE), curve('=1+1', TRIANGLE, { unit: 'mV', scale: 1000 })]);
    const lines = plotCsv(plot).split('\r\n');
    expect(lines[0]).toBe('time (ms),"a, ""b"" (V)", =1+1 (mV)');
    expect(lines).toContain('5,10,10000');
    expect(lines.at(-1)).toBe('');
  });

  test('CSV: a jump is a row before and a row after', () => {
    const waveform = { grid: Float64Array.of(0, 0.005, 0.02), values: Float64Array.of(0, 0, 0, 0, 10, 10, 10, 10) };
    const plot = plotOf([curve('a', TRIANGLE, { waveform })]);
    expect(plotCsv(plot).split('\r\n').slice(1)).toEqual(['0,0', '5,0', '5,10', '20,10', '']);
  });

  test('CSV: curves with points of their own have values at all of them', () => {
    const plot = plotOf([
      curve('a', TRIANGLE),
      curve('b', [
        [0, 0],
        [0.01, 4],
        [0.02, 0],
      ]),
    ]);
    // at 5 ms b is half way up to 4; at 10 ms a passes zero; at 15 ms b is half way down
    expect(plotCsv(plot).split('\r\n').slice(1)).toEqual(['0,0,0', '5,10,2', '10,0,4', '15,-10,2', '20,0,0', '']);
  });

  test('CSV: where a curve has no value the cell is empty', () => {
    const { grid, values } = polyline(TRIANGLE);
    values.fill(Number.NaN, 4, 8);
    const plot = plotOf([curve('a', TRIANGLE, { waveform: { grid, values } }), curve('b', TRIANGLE)]);
    expect(plotCsv(plot).split('\r\n')).toContain('5,,10');
  });

  test('a small ripple on a large value keeps its shape', () => {
    const ripple = curve('a', [
      [0, 5],
      [0.01, 5.000001],
      [0.02, 5.0000004],
    ]);
    const plot = plotOf([ripple]);
    expect(drawnPoints(ripple, plot).map(({ y }) => y)).toEqual([5, 5.000001, 5.0000004]);
    expect(plotCsv(plot)).toContain('10,5.000001\r\n20,5.0000004');
  });

  test('one quantity against another: extremes of both are kept, and each run has its own', () => {
    const points = Array.from({ length: 20_001 }, (_, k): [number, number] => [k / 20_000, Math.sin(k / 7)]);
    const aside = points.map(([x, y]): [number, number] => [x, y / 2]);
    points[12_345]![1] = 40;
    aside[7_003]![1] = -9;
    const against = polyline(aside);
    const conditions = (text: string) => [{ name: 'C1', text, value: 1 }];
    const curves = [
      curve('i', points, { against, conditions: conditions('1 µF') }),
      curve('i', points, {
        against: polyline([
          [0, 1],
          [1, 3],
        ]),
        conditions: conditions('2 µF'),
      }),
    ];
    const plot = { ...plotOf(curves), horizontal: { label: 'v', unit: 'V', scale: 1 } };
    const drawn = drawnPoints(curves[0]!, plot);
    expect(Math.max(...drawn.map(({ y }) => y!))).toBe(40);
    expect(Math.min(...drawn.map(({ x }) => x))).toBe(-9);
    const { columns, rows } = valueTable(plot);
    expect(columns).toEqual([
      'parameter',
      'v, C1 = 1 µF (V)',
      'v, C1 = 2 µF (V)',
      'i, C1 = 1 µF (V)',
      'i, C1 = 2 µF (V)',
    ]);
    // half way along the axis a straight line from 1 to 3 is at 2
    expect(rows[6]![2]).toBe('2');
  });

  test('a table of a dozen steps from end to end', () => {
    const { columns, rows } = valueTable(plotOf([curve('a', TRIANGLE)]));
    expect(columns).toEqual(['time (ms)', 'a (V)']);
    expect(rows).toHaveLength(13);
    expect(rows[0]).toEqual(['0', '0']);
    // half way the triangle passes zero; at nine twelfths it is at its lowest
    expect(rows[6]).toEqual(['10', '0']);
    expect(rows[9]).toEqual(['15', '\u221210']);
  });
});

// W3C, Web Content Accessibility Guidelines 2.2, criteria 1.4.3 and 1.4.11: 4.5 to 1 for text, 3 to 1 for parts of graphics
test.each(['light', 'dark'] as const)('colours of plots stand out from a %s page', (theme) => {
  const paper = { light: '#fbfaf7', dark: '#14181d' }[theme];
  for (const [name, colours] of Object.entries(PLOT_PALETTE)) {
    if (name.startsWith('--plot-series')) {
      for (const ground of [paper, PLOT_PALETTE['--plot-span']![theme], ...(theme === 'light' ? ['#ffffff'] : [])]) {
        expect(contrast(colours[theme], ground), name).toBeGreaterThan(3);
      }
    }
    if (name === '--plot-text') expect(contrast(colours[theme], paper), name).toBeGreaterThan(4.5);
    if (name === '--plot-axis') expect(contrast(colours[theme], paper), name).toBeGreaterThan(3);
  }
});

/**
 * G. M. Machado, M. M. Oliveira, L. A. F. Fernandes, A physiologically-based model for simulation of color vision deficiency, IEEE
 * Trans. Vis. Comput. Graph. 15 (2009): matrices on linear sRGB for full protanopia, deuteranopia and tritanopia (from memory).
 */
const VISIONS: { readonly [name: string]: readonly (readonly [number, number, number])[] } = {
  common: [
    [1, 0, 0],
    [0, 1, 0],
    [0, 0, 1],
  ],
  protanopia: [
    [0.152286, 1.052583, -0.204868],
    [0.114503, 0.786281, 0.099216],
    [-0.003882, -0.048116, 1.051998],
  ],
  deuteranopia: [
    [0.367322, 0.860646, -0.227968],
    [0.280085, 0.672501, 0.047413],
    [-0.01182, 0.04294, 0.968881],
  ],
  tritanopia: [
    [1.255528, -0.076749, -0.178779],
    [-0.078411, 0.930809, 0.147602],
    [0.004733, 0.691367, 0.3039],
  ],
};

// Distances of CIE 1976 L*a*b* (ISO/CIE 11664-4): about 2.3 is just noticed side by side (from memory); thin lines need several times that
describe.each(['light', 'dark'] as const)('series of plots on a %s page', (theme) => {
  const series = Array.from({ length: 8 }, (_, k) => PLOT_PALETTE[`--plot-series-${k + 1}`]![theme]);

  test.each(Object.entries(VISIONS))('are told apart: %s', (_, matrix) => {
    const seen = series.map((colour) => lightnessAndHue(colour, matrix));
    for (const [i, one] of seen.entries()) {
      for (const [j, other] of seen.entries()) {
        if (i >= j) continue;
        const distance = Math.hypot(...one.map((value, k) => value - other[k]!));
        expect(distance, `${i + 1} and ${j + 1}`).toBeGreaterThan(j < 4 ? 25 : 12);
      }
    }
  });

  test('differ from their neighbours in grey', () => {
    const lightness = series.map((colour) => lightnessAndHue(colour, VISIONS.common!)[0]!);
    for (let k = 1; k < 8; k++)
      expect(Math.abs(lightness[k]! - lightness[k - 1]!), `${k} and ${k + 1}`).toBeGreaterThan(12);
  });
});

/** L*, a*, b* of a colour as it is seen; sRGB by IEC 61966-2-1, white D65. */
function lightnessAndHue(colour: string, matrix: readonly (readonly number[])[]): number[] {
  const own = linearChannels(colour);
  const [red, green, blue] = matrix.map((row) => {
    return Math.max(
      0,
      Math.min(
        1,
        row.reduce((sum, weight, k) => sum + weight * own[k]!, 0),
      ),
    );
  }) as [number, number, number];
  const cube = (t: number): number => (t > (6 / 29) ** 3 ? Math.cbrt(t) : t / (3 * (6 / 29) ** 2) + 4 / 29);
  const x = cube((0.4124 * red + 0.3576 * green + 0.1805 * blue) / 0.9505);
  const y = cube(0.2126 * red + 0.7152 * green + 0.0722 * blue);
  const z = cube((0.0193 * red + 0.1192 * green + 0.9505 * blue) / 1.089);
  return [116 * y - 16, 500 * (x - y), 200 * (y - z)];
}

function linearChannels(colour: string): number[] {
  return [1, 3, 5].map((at) => {
    const channel = Number.parseInt(colour.slice(at, at + 2), 16) / 255;
    return channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4;
  });
}

/** Contrast ratio and relative luminance as the guidelines define them. */
function contrast(one: string, other: string): number {
  const luminance = (colour: string): number => {
    const [red, green, blue] = linearChannels(colour);
    return 0.2126 * red! + 0.7152 * green! + 0.0722 * blue!;
  };
  const [light, dark] = [luminance(one), luminance(other)].sort((a, b) => b - a);
  return (light! + 0.05) / (dark! + 0.05);
}
