/// <reference lib="dom" />
/** A site in which some notes have mistakes: the others are built, the mistakes are on their pages, and the command says so. */
import { spawnSync } from 'node:child_process';
import { cpSync, mkdirSync, mkdtempSync, readFileSync, rmSync, symlinkSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { AxeBuilder } from '@axe-core/playwright';
import { chromium } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findBrowser } from '../../plugins/command-line/find-browser.mjs';
import { BROWSER_OPTIONS } from './browser-options.ts';

const SOUND = `---
title: Sound note
number: EX-2
---

\`\`\`circuit
components:
  G1: { source: 5 V, nodes: [a, gnd] }
  R1: { resistor: 1 kΩ, nodes: [a, gnd] }
\`\`\`

\`\`\`analysis
find: operating point
\`\`\`

\`\`\`figures
current: { is: R1.i, in: mA, must: < 4 mA }
\`\`\`

The other note has :val[broken#nothing]{in=mA}.
`;

const BROKEN = `---
title: "Broken <i>note</i>"
number: EX-1
status: almost
---

\`\`\`circuit
components:
  G1: { source: 5 V, nodes: [a, gnd] }
  R1: { resistor: 1 kV, nodes: [a, gnd] }
\`\`\`

\`\`\`plot
lines: [R1.v]
vega: { heigth: 200 }
\`\`\`

{{ braces }} stay.
`;

const LIMIT = SOUND.replace('EX-2', 'EX-3').replace(/The other note.*/, '');

const project = mkdtempSync(join(tmpdir(), 'project-'));
let run: { status: number | null; stdout: string; stderr: string };

beforeAll(() => {
  for (const name of ['plugins', 'solver', 'site', 'eleventy.config.ts', 'package.json', 'tsconfig.json']) {
    cpSync(name, join(project, name), { recursive: true });
  }
  symlinkSync(resolve('node_modules'), join(project, 'node_modules'), 'junction');
  const notes = join(project, 'content/notes');
  mkdirSync(notes, { recursive: true });
  writeFileSync(join(notes, 'broken.md'), BROKEN);
  writeFileSync(join(notes, 'sound.md'), SOUND);
  writeFileSync(join(notes, 'limit.md'), LIMIT);
  run = build();
}, 120_000);

afterAll(() => rmSync(project, { recursive: true, force: true }));

function build(): typeof run {
  const { INIT_CWD: _, ...env } = process.env;
  return spawnSync(process.execPath, ['--import', 'tsx', 'plugins/command-line/build.ts'], {
    cwd: project,
    env,
    encoding: 'utf8',
  });
}

const page = (name: string): string => readFileSync(join(project, '_site', name), 'utf8');

describe('a build with mistakes in its notes', () => {
  it('ends with status 2, every mistake in full, and one summary', () => {
    expect(run.status).toBe(2);
    for (const place of ['broken.md:4:9: error', 'broken.md:10:19: error', 'sound.md:20']) {
      expect(run.stderr).toContain(place);
    }
    expect(run.stderr).toMatch(/R1: \{ resistor: 1 kV.*\n\s+\^{4}\n/);
    expect(run.stderr).toContain('limit broken: current must be < 4 mA');
    expect(run.stdout.trim().split('\n')).toHaveLength(1);
    expect(run.stdout).toMatch(/^3 notes, .* 2 limits not kept, 3 problems, 1 warning, [\d.]+ s$/m);
  });

  it('shows each mistake where its block was, and all at the head', () => {
    const html = page('notes/broken.html');
    expect(html).toContain('2 problems and 1 warning in this note');
    expect(html.match(/class="problem problem-error"/g)).toHaveLength(2);
    expect(html).toContain('{{ braces }} stay.');
    expect(html).toContain('<h1>Broken &lt;i&gt;note&lt;/i&gt;</h1>');
    expect(html).toContain('<title>EX-1 Broken &lt;i&gt;note&lt;/i&gt;</title>');
  });

  it('builds what is sound', () => {
    const html = page('notes/sound.html');
    expect(html).toContain('5.00');
    expect(html).toContain('verdict-broken');
    expect(html).toContain('class="no-value"');
  });

  it('lists the notes by number with what is wrong in each', () => {
    const rows = [...page('index.html').matchAll(/<tr>\s*<td>(EX-\d)<\/td>(.*?)<\/tr>/gs)].map(([, number, rest]) => [
      number,
      ...[...rest!.matchAll(/<td class="number">(.*?)<\/td>/gs)].map(([, cell]) =>
        cell!.replace(/<[^>]*>/g, '').trim(),
      ),
    ]);
    expect(rows).toEqual([
      ['EX-1', '0', '0', '2'],
      ['EX-2', '1', '✗ broken 1', '1'],
      ['EX-3', '1', '✗ broken 1', '0'],
    ]);
  });

  it('a limit that is not kept does not fail a build', () => {
    for (const name of ['broken', 'sound']) rmSync(join(project, `content/notes/${name}.md`));
    const again = build();
    expect(again.stderr).toContain('limit broken');
    expect(again.status).toBe(0);
    expect(() => page('notes/broken.html')).toThrow();
    writeFileSync(join(project, 'content/notes/broken.md'), BROKEN);
    build();
  });
});

const browserPath = findBrowser();

describe.skipIf(browserPath === undefined)('a page with mistakes, in a browser', () => {
  it('is accessible in light and dark', async () => {
    const browser = await chromium.launch({ executablePath: browserPath, ...BROWSER_OPTIONS });
    try {
      for (const colorScheme of ['light', 'dark'] as const) {
        const context = await browser.newContext({ colorScheme });
        const tab = await context.newPage();
        await tab.goto(pathToFileURL(join(project, '_site/notes/broken.html')).href);
        const { violations } = await new AxeBuilder({ page: tab }).analyze();
        expect(
          violations.map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(' ')).join()}`),
        ).toEqual([]);
        // the list leads to the panel
        await tab.locator('.problem-list a').first().click();
        expect(await tab.evaluate(() => document.querySelector(':target')?.className)).toContain('problem');
        await context.close();
      }
    } finally {
      await browser.close();
    }
  });
});
