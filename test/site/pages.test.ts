/// <reference lib="dom" />
/** The built site in a real browser: no error, no request that leaves the machine, everything visible and reachable. */
import { spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { gzipSync } from 'node:zlib';
import { AxeBuilder } from '@axe-core/playwright';
import { type Browser, type BrowserContext, chromium, type Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findBrowser } from '../../plugins/command-line/find-browser.mjs';
import { startServer } from '../../plugins/command-line/server.ts';
import { BROWSER_OPTIONS } from './browser-options.ts';

const browserPath = findBrowser();
const folder = mkdtempSync(join(tmpdir(), 'site-'));
const output = join(folder, 'out');
const notes = readdirSync('content/notes')
  .filter((name) => name.endsWith('.md'))
  .map((name) => `notes/${name.replace(/\.md$/, '')}.html`);
const pages = ['index.html', ...notes];

/** By the command, as a user does: the program is run from its TypeScript sources. */
function build(target: string): void {
  const run = spawnSync(process.execPath, ['--import', 'tsx', 'plugins/command-line/build.ts', '--output', target], {
    encoding: 'utf8',
  });
  expect(run.stderr).toBe('');
  expect(run.status).toBe(0);
}

let browser: Browser;
let address: string;
let close: () => Promise<void>;

beforeAll(async () => {
  build(output);
  const server = await startServer({ folder: output, port: 0 });
  address = server.address;
  close = server.close;
  if (browserPath === undefined) return;
  browser = await chromium.launch({ executablePath: browserPath, ...BROWSER_OPTIONS });
}, 300_000);

afterAll(async () => {
  await browser?.close();
  await close?.();
  rmSync(folder, { recursive: true, force: true });
});

interface Visit {
  readonly page: Page;
  readonly context: BrowserContext;
  readonly complaints: string[];
  readonly outside: string[];
}

async function visit(url: string, options: Parameters<Browser['newContext']>[0] = {}): Promise<Visit> {
  const context = await browser.newContext(options);
  const page = await context.newPage();
  const complaints: string[] = [];
  const outside: string[] = [];
  page.on('console', (message) => {
    if (message.type() === 'error' || message.type() === 'warning') complaints.push(message.text());
  });
  page.on('pageerror', (error) => complaints.push(String(error)));
  page.on('request', (request) => {
    const { protocol, hostname } = new URL(request.url());
    if (protocol !== 'file:' && protocol !== 'data:' && hostname !== '127.0.0.1') outside.push(request.url());
  });
  page.on('requestfailed', (request) => complaints.push(`failed: ${request.url()}`));
  await page.goto(url);
  return { page, context, complaints, outside };
}

/** What an accessibility audit finds; the inside of a drawing is hidden behind its title and description. */
async function violationsOf(page: Page, rules?: string[]): Promise<string[]> {
  const builder = new AxeBuilder({ page }).exclude('figure.plot svg > g');
  const { violations } = await (rules ? builder.withRules(rules) : builder).analyze();
  return violations.map(({ id, nodes }) => `${id}: ${nodes.map(({ target }) => target.join(' ')).join(', ')}`);
}

describe('files of the site', () => {
  it('links are relative and lead to files that are there', () => {
    for (const name of pages) {
      const html = readFileSync(join(output, name), 'utf8');
      for (const [, target] of html.matchAll(/(?:href|src)="([^"#]*)(?:#[^"]*)?"/g)) {
        if (!target || target.startsWith('data:')) continue;
        expect(target, name).not.toMatch(/^([a-z]+:|\/)/);
        const file = new URL(target, pathToFileURL(join(output, name)));
        expect(() => readFileSync(file), `${name} → ${target}`).not.toThrow();
      }
    }
  });

  it('a note page with its plots is below 150 kB compressed, and holds no script', () => {
    for (const name of notes) {
      const html = readFileSync(join(output, name));
      expect(gzipSync(html).length, name).toBeLessThan(150_000);
      expect(html.toString()).not.toMatch(/<script/i);
    }
  });

  it('the same input gives the same bytes', () => {
    const again = join(folder, 'again');
    build(again);
    const files = readdirSync(output, { recursive: true, withFileTypes: true }).filter((entry) => entry.isFile());
    expect(files.length).toBeGreaterThan(pages.length);
    for (const { parentPath, name } of files) {
      const path = join(parentPath, name);
      const other = join(again, path.slice(output.length));
      expect(readFileSync(other).equals(readFileSync(path)), path).toBe(true);
    }
  }, 300_000);
});

describe.skipIf(browserPath === undefined)('pages in a browser', () => {
  for (const name of pages) {
    it(`${name}: no complaint, no outside request, accessible in light and dark, and no wider than a narrow window`, async () => {
      const { page, context, complaints, outside } = await visit(new URL(name, address).href);
      expect(await page.locator('h1').count()).toBe(1);
      // the stylesheet was applied
      expect(await page.evaluate(() => getComputedStyle(document.body).marginTop)).toBe('0px');
      expect(await violationsOf(page)).toEqual([]);
      // the structure is the same in the dark: only the colours are looked at again
      await page.emulateMedia({ colorScheme: 'dark' });
      expect(await violationsOf(page, ['color-contrast', 'link-in-text-block'])).toEqual([]);
      await page.setViewportSize({ width: 360, height: 740 });
      expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(360);
      expect(complaints).toEqual([]);
      expect(outside).toEqual([]);
      await context.close();
    });

    it(`${name}: from the file system`, async () => {
      const { page, context, complaints, outside } = await visit(pathToFileURL(join(output, name)).href);
      expect(await page.evaluate(() => getComputedStyle(document.body).marginTop)).toBe('0px');
      expect(complaints).toEqual([]);
      expect(outside).toEqual([]);
      await context.close();
    });
  }

  it('plots are visible without scripts, with title and description', async () => {
    for (const name of notes) {
      const { page, context } = await visit(new URL(name, address).href, { javaScriptEnabled: false });
      const plots = page.locator('figure.plot svg');
      const count = await plots.count();
      for (let k = 0; k < count; k++) {
        const plot = plots.nth(k);
        const box = (await plot.boundingBox())!;
        expect(box.width).toBeGreaterThan(300);
        expect(box.height).toBeGreaterThan(120);
        expect((await plot.locator('title').first().textContent())!.length).toBeGreaterThan(0);
        expect((await plot.locator('desc').first().textContent())!.length).toBeGreaterThan(20);
      }
      await context.close();
    }
  });

  it('everything is reached by the keyboard, in order, with visible focus', async () => {
    const { page, context } = await visit(new URL('notes/line-lamp.html', address).href);
    await page.keyboard.press('Tab');
    expect(await page.evaluate(() => document.activeElement?.className)).toBe('skip');
    await page.keyboard.press('Enter');
    expect(await page.evaluate(() => document.activeElement?.id)).toBe('content');
    const seen = new Set<string>();
    for (let k = 0; k < 60; k++) {
      await page.keyboard.press('Tab');
      const focus = await page.evaluate(() => {
        const element = document.activeElement;
        if (!element || element === document.body) return undefined;
        return { tag: element.tagName, outline: getComputedStyle(element).outlineStyle };
      });
      if (!focus) break;
      expect(focus.outline).not.toBe('none');
      seen.add(focus.tag);
    }
    // downloads, folds and the scrolling regions of tables
    expect([...seen]).toEqual(expect.arrayContaining(['A', 'SUMMARY', 'DIV']));
    await context.close();
  });

  it('a link of the home page leads to its note and back', async () => {
    const { page, context } = await visit(pathToFileURL(join(output, 'index.html')).href);
    await page.locator('table.index a').first().click();
    expect(await page.locator('.title-block').count()).toBe(1);
    await page.locator('.site-header a').click();
    expect(await page.locator('table.index').count()).toBe(1);
    await context.close();
  });
});
