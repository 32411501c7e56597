import { describe, expect, test } from 'vitest';
import { renderFigureTable } from '../../../plugins/render/figure-table.ts';
import { RESISTOR, solvedFrom, unbalanced } from './notes.ts';

function tableOf(figures: string): string {
  const { figureTables, problems } = solvedFrom(`${RESISTOR}\n\`\`\`figures loads\n${figures}\n\`\`\`\n`);
  expect(problems).toEqual([]);
  return renderFigureTable(figureTables[0]!);
}

const cellsOf = (html: string): string[] =>
  [...html.matchAll(/<t[dh](?: [^>]*)?>(.*?)<\/t[dh]>/g)].map(([, cell]) =>
    cell!.replace(/[\u2007\u2008]/g, '').replaceAll('\u00a0', ' '),
  );

describe('a table of figures', () => {
  // 10 V peak across 1 kΩ: 10 mA peak, 7.07 mA RMS, 50 mW mean
  test('has the columns of a data sheet', () => {
    const html = tableOf(
      'i_rms: { is: rms(R1.i), label: RMS current, symbol: I_R(rms), in: mA, must: < 8 mA, requirement: EX-1 }\n' +
        'power: { is: mean(R1.p), label: Power, symbol: P, must: 60 mW .. 1 W }',
    );
    expect(cellsOf(html)).toEqual([
      ...['Parameter', 'Symbol', 'Minimum', 'Typical', 'Maximum', 'Unit', 'Limit', 'Verdict', 'Requirement'],
      ...['RMS current', '<i>I</i><sub>R(rms)</sub>', '–', '7.07', '–', 'mA', '&lt; 8'],
      ...['<span class="verdict verdict-kept"><span aria-hidden="true">✓</span> kept</span>', 'EX-1'],
      ...['Power', '<i>P</i>', '–', '50.0', '–', 'mW', '60 … 1000'],
      ...['<span class="verdict verdict-broken"><span aria-hidden="true">✗</span> broken</span>', ''],
    ]);
    expect(unbalanced(html)).toBeUndefined();
  });

  test('heads of columns and rows have their scope, and the region its name', () => {
    const html = tableOf('i_rms: rms(R1.i)');
    expect(html.match(/<th(?=[ >])(?! scope="(col|row)")/g)).toBeNull();
    expect(html).toContain('aria-label="Loads" tabindex="0"');
    expect(html).toContain('<tr id="figure_i-rms"><th scope="row">i rms</th>');
  });

  test('has no columns of limits where there is no limit', () => {
    expect(cellsOf(tableOf('i_rms: rms(R1.i)')).slice(0, 5)).toEqual([
      'Parameter',
      'Minimum',
      'Typical',
      'Maximum',
      'Unit',
    ]);
  });

  test('leaves hidden figures out, and vanishes where all are hidden', () => {
    const some = tableOf('a: { is: rms(R1.i), hidden: true }\nb: max(R1.i)');
    expect(some.match(/<tr /g)).toHaveLength(1);
    expect(tableOf('a: { is: rms(R1.i), hidden: true }')).toBe('');
  });

  test('digits are as asked', () => {
    expect(cellsOf(tableOf('a: { is: max(R1.i), in: mA, digits: 2 }'))).toContain('10');
    expect(cellsOf(tableOf('a: { is: max(R1.i), in: mA }'))).toContain('10.0');
  });

  test('what an author writes is text', () => {
    const html = tableOf(
      'a: { is: max(R1.i), label: "<img src=x onerror=alert(1)>", symbol: "<b>_<i>", requirement: "\\"><script>", must: < 1 A }',
    );
    expect(html).not.toMatch(/<img|<script|<b>/);
    expect(html).toContain('&lt;img src=x onerror=alert(1)&gt;');
    expect(unbalanced(html)).toBeUndefined();
  });
});

test('a family has a least and a greatest value', () => {
  const note = solvedFrom(
    `${RESISTOR.replace('until: 20 ms', 'until: 20 ms\nvary: { R1: [1 kΩ, 500 Ω, 2 kΩ] }')}\n` +
      '```figures\na: { is: max(R1.i), in: mA }\n```\n',
  );
  // 10 V over 2 kΩ, 1 kΩ and 500 Ω
  expect(cellsOf(renderFigureTable(note.figureTables[0]!)).slice(-4)).toEqual(['5.00', '10.0', '20.0', 'mA']);
});
