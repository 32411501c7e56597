import { describe, expect, test } from 'vitest';
import { renderNotePage } from '../../../plugins/render/note-page.ts';
import { RESISTOR, solvedFrom, unbalanced } from './notes.ts';

const pageOf = (text: string) => renderNotePage(solvedFrom(text));

describe('a page', () => {
  test('has the results where the blocks were, in order', async () => {
    const { html, problems, files } = await pageOf(
      `Before.\n\n${RESISTOR}\nBetween.\n\n\`\`\`figures\na: max(R1.i)\n\`\`\`\n\n\`\`\`plot\ntitle: A plot\nlines: [R1.v]\n\`\`\`\n\nAfter.\n`,
    );
    const order = [
      'Before.',
      'class="components"',
      'class="analysis"',
      'Between.',
      'class="figures"',
      '<svg',
      'After.',
    ];
    const places = order.map((part) => html.indexOf(part));
    expect(places.every((place) => place >= 0)).toBe(true);
    expect(places.toSorted((a, b) => a - b)).toEqual(places);
    expect(problems).toEqual([]);
    expect(files.map(({ name }) => name)).toEqual(['example-a-plot.csv', 'example-a-plot.json']);
    for (const { name } of files) expect(html).toContain(`href="example/${name}" download`);
    expect(unbalanced(html)).toBeUndefined();
  });

  test('is the same each time', async () => {
    const text = `${RESISTOR}\n\`\`\`plot\nlines: [R1.v]\nright: [R1.i]\n\`\`\`\n`;
    expect(await pageOf(text)).toEqual(await pageOf(text));
  });

  test('has computed numbers in its sentences', async () => {
    const { html } = await pageOf(`${RESISTOR}\nIt carries :val[rms(R1.i)]{in=mA digits=2}.\n`);
    expect(html).toMatch(/It carries <span class="value" title="rms\(R1\.i\)">7\.1\u00a0mA<\/span>\./);
  });

  test('plots of one title have files of different names', async () => {
    const plot = '```plot\ntitle: Same\nlines: [R1.v]\n```\n';
    const { files, html } = await pageOf(`${RESISTOR}\n${plot}\n${plot}`);
    expect(files.map(({ name }) => name)).toEqual([
      'example-same.csv',
      'example-same.json',
      'example-same-2.csv',
      'example-same-2.json',
    ]);
    const ids = [...html.matchAll(/\sid="([^"]*)"/g)].map(([, id]) => id);
    expect(new Set(ids).size).toBe(ids.length);
  });

  test('headings can be linked to, whatever they say', async () => {
    const { headings, html } = await pageOf(
      `${RESISTOR}\n## Results\n\n## Results\n\n## At :val[max(R1.v)]{digits=2} and \`x\`\n\n## ±\n`,
    );
    expect(headings.map(({ id }) => id)).toEqual(['results', 'results-2', 'at-10-v-and-x', 'x']);
    for (const { id } of headings) expect(html).toContain(`id="${id}"`);
    expect(headings[2]!.text).toBe('At 10\u00a0V and x');
  });

  test('braces are braces, HTML is text, links to notes lead to their pages', async () => {
    const { html } = await pageOf(
      '{{ 7 * 7 }} {% raw %}\n\n<script>alert(1)</script>\n\nA <b onclick="x">word</b>, [other](other-note.md#x), [bad](javascript:alert(1)).\n\n```js\n<i>\n```\n',
    );
    expect(html).toContain('{{ 7 * 7 }} {% raw %}');
    expect(html).not.toMatch(/<script|<b |<i>|href="javascript/);
    expect(html).toContain('<a href="other-note.html#x">');
    expect(html).toContain('<pre><code class="language-js">&lt;i&gt;');
  });
});

describe('mistakes', () => {
  test('stand where their block was, and all at the head', async () => {
    const { html } = await pageOf(
      '---\ntitle: A note\nstatus: nearly\n---\n\n```circuit\ncomponents:\n  R1: { resistor: 5 V, nodes: [a, gnd] }\n```\n\nText goes on.\n\n```analysis\nfind: operating point\n```\n',
    );
    expect(html).toMatch(/^<section class="problem-list"/);
    expect(html).toContain('2 problems in this note');
    // the title block has no place on the page: its problem is shown whole in the list
    expect(html).toMatch(/<li><div class="problem problem-error".*?nearly/);
    expect(html).toContain('<a href="#problem_2">line 8</a>');
    expect(html).toMatch(/id="problem_2">.*R1: \{ resistor: 5 V.*\n\s+\^\^\^/);
    expect(html).toContain('Text goes on.');
    expect(html).toContain('class="no-result"');
    expect(unbalanced(html)).toBeUndefined();
  });

  test('of a specification are found by drawing, where the properties are', async () => {
    const { html, problems, files } = await pageOf(
      `${RESISTOR}\n\`\`\`plot\nlines: [R1.v]\nvega: { layer: [5] }\n\`\`\`\n`,
    );
    expect(problems).toHaveLength(1);
    expect(problems[0]).toMatchObject({ severity: 'error', sourceLine: 'vega: { layer: [5] }', column: 1 });
    expect(problems[0]!.message).toMatch(/^the plot cannot be drawn with these properties: /);
    expect(html).toContain('1 problem in this note');
    expect(files).toEqual([]);
  });

  test('that hold HTML are text', async () => {
    const { html } = await pageOf(
      '```circuit <img>\ncomponents:\n  "<b>": { resistor: <script>, nodes: ["<i>", gnd] }\n  R1: { "<u>": 5, nodes: [a, gnd] }\n```\n\n:val[<s>]{in="<em>"}\n',
    );
    expect(html).not.toMatch(/<(img|b|i|u|s|em|script)[ >]/);
    expect(unbalanced(html)).toBeUndefined();
  });
});

describe('properties of a plot that are refused', () => {
  test.each([
    ['data: { url: "http://example.com/a.csv" }', 'data'],
    ['layer: [{ data: { url: "a.csv" }, mark: line }]', 'url'],
    ['layer: [{ data: { values: [1] }, mark: image }]', 'mark'],
    ['layer: [{ data: { values: [1] }, mark: { type: image } }]', 'mark'],
    ['encoding: { href: { value: "http://example.com" } }', 'href'],
    ['encoding: { x: { axis: { labelExpr: "1" } } }', 'labelExpr'],
    ['transform: [{ calculate: "1", as: x }]', 'transform'],
    ['width: { expr: "1" }', 'expr'],
    ['params: [{ name: x }]', 'params'],
    ['encoding: { color: { condition: { test: "true", value: red } } }', 'test'],
  ])('%s', (vega, key) => {
    const { problems, plots } = solvedFrom(`${RESISTOR}\n\`\`\`plot\nlines: [R1.v]\nvega: { ${vega} }\n\`\`\`\n`);
    expect(problems.map(({ message }) => message)).toContainEqual(expect.stringMatching(`^\`${key}\` is refused`));
    expect(plots).toEqual([]);
  });

  test('one that is not known is named with its nearest neighbour, and the plot is drawn', () => {
    const { problems, plots } = solvedFrom(`${RESISTOR}\n\`\`\`plot\nlines: [R1.v]\nvega: { heigth: 100 }\n\`\`\`\n`);
    expect(problems).toHaveLength(1);
    expect(problems[0]).toMatchObject({ severity: 'warning', expected: '`height` is the nearest name', column: 9 });
    expect(plots).toHaveLength(1);
  });
});
