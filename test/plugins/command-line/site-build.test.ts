/** The site is built whole or not at all: in a project of its own, with this program's templates. */
import { spawn, spawnSync } from 'node:child_process';
import {
  cpSync,
  existsSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  realpathSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { SITE_MARK, whyNotOutput } from '../../../plugins/command-line/output-folder.ts';

const tsx = pathToFileURL(createRequire(import.meta.url).resolve('tsx')).href;
const program = (path: string): string => pathToFileURL(resolve(path)).href;

const NOTE = `# Divider

\`\`\`circuit
components:
  G1: { source: 10 V, nodes: [in, gnd] }
  R1: { resistor: 3 kΩ, nodes: [in, out] }
  R2: { resistor: 1 kΩ, nodes: [out, gnd] }
\`\`\`

\`\`\`analysis op
find: operating point
\`\`\`

\`\`\`figures
output: { is: out, must: < 2 V }
\`\`\`
`;

/** Builds, and tells what came of it. */
const BUILD = `
import { buildSite, reportBuild } from '${program('plugins/command-line/site-build.ts')}';
try {
  process.exitCode = reportBuild(await buildSite({ projectRoot: process.cwd(), output: process.argv[1] }));
} catch (error) {
  console.error('not built:', error.message);
  process.exitCode = 1;
}
`;

let root: string;

beforeAll(() => {
  root = realpathSync(mkdtempSync(join(tmpdir(), 'build-')));
  mkdirSync(join(root, 'content/notes'), { recursive: true });
  cpSync('site', join(root, 'site'), { recursive: true });
  writeFileSync(join(root, 'package.json'), '{ "type": "module" }');
  const config = readFileSync('eleventy.config.ts', 'utf8');
  writeFileSync(
    join(root, 'eleventy.config.ts'),
    config.replace("'./plugins/ohmfolio.ts'", `'${program('plugins/ohmfolio.ts')}'`),
  );
  writeFileSync(join(root, 'content/notes/divider.md'), NOTE);
});

afterAll(() => rmSync(root, { recursive: true, force: true }));

function build(output = join(root, '_site')): { status: number | null; stdout: string; stderr: string } {
  return spawnSync(process.execPath, ['--import', tsx, '--input-type=module', '-e', BUILD, output], {
    cwd: root,
    encoding: 'utf8',
  });
}

/** Everything beside the sources of the small project. */
const leftBeside = (): string[] => readdirSync(root).filter((name) => name.startsWith('_site.'));

describe('building', () => {
  it('writes the site, prints what limits are not kept, and one line on the whole', () => {
    const { status, stdout, stderr } = build();
    // 10 V over 3 kΩ and 1 kΩ: 2.5 V across the latter, not below 2 V; a broken limit is a result, not a failure
    expect(status).toBe(0);
    expect(stderr.trim()).toMatch(/^content\/notes\/divider\.md:15: limit broken: output must be < 2 V$/);
    expect(stdout.trim()).toMatch(/^1 note, 1 solved analysis, 1 figure, 1 limit not kept, 0 problems, [\d.]+ s$/);
    expect(readFileSync(join(root, '_site/notes/divider.html'), 'utf8')).toContain('2.50');
    expect(existsSync(join(root, '_site', SITE_MARK))).toBe(true);
    expect(leftBeside()).toEqual([]);
  });

  it('writes a note with a mistake too, prints it in full, and ends with status 2', () => {
    writeFileSync(join(root, 'content/notes/mistaken.md'), NOTE.replace('3 kΩ', '3 V'));
    const { status, stdout, stderr } = build();
    expect(status).toBe(2);
    expect(stderr).toMatch(/^content\/notes\/mistaken\.md:6:\d+: error: .*\n.*\n +\^+\n/m);
    expect(stdout).toMatch(/^2 notes, .* [1-9]\d* problems?, /);
    expect(existsSync(join(root, '_site/notes/mistaken.html'))).toBe(true);
    expect(existsSync(join(root, '_site/notes/divider.html'))).toBe(true);
    rmSync(join(root, 'content/notes/mistaken.md'));
  });

  it('keeps the last site where a template is broken, and says which', () => {
    const layout = join(root, 'site/layouts/page.njk');
    const before = readFileSync(layout, 'utf8');
    const page = readFileSync(join(root, '_site/index.html'), 'utf8');
    writeFileSync(layout, `${before}{% if`);
    const { status, stdout, stderr } = build();
    writeFileSync(layout, before);
    expect({ status, stdout }).toEqual({ status: 1, stdout: '' });
    expect(stderr).toMatch(/not built/);
    expect(readFileSync(join(root, '_site/index.html'), 'utf8')).toBe(page);
    expect(leftBeside()).toEqual([]);
  });

  it('clears away what a killed build left, and nothing of one that is running', () => {
    const { pid } = spawnSync(process.execPath, ['-e', '']);
    mkdirSync(join(root, `_site.building-${pid}`));
    mkdirSync(join(root, `_site.old-${pid}`));
    mkdirSync(join(root, `_site.building-${process.pid}`));
    mkdirSync(join(root, '_site.building-by-hand'));
    expect(build().status).toBe(0);
    expect(leftBeside().sort()).toEqual([`_site.building-${process.pid}`, '_site.building-by-hand'].sort());
    for (const name of leftBeside()) rmSync(join(root, name), { recursive: true });
  });

  it('goes to any other folder, and replaces nothing but a site there', () => {
    const output = join(root, 'elsewhere/site');
    expect(build(output).status).toBe(0);
    expect(build(output).status).toBe(0);
    const { status, stderr } = build(join(root, 'content'));
    expect(status).toBe(1);
    expect(stderr).toMatch(/something else than a site \(notes\)/);
    expect(existsSync(join(root, 'content/notes/divider.md'))).toBe(true);
  });
});

describe('a folder that must not be replaced', () => {
  it('is the project, what holds it, a file, or a folder with anything in it but a site', () => {
    const other = mkdtempSync(join(tmpdir(), 'output-'));
    try {
      expect(whyNotOutput(root, root)).toMatch(/project/);
      expect(whyNotOutput(resolve(root, '..'), root)).toMatch(/project/);
      expect(whyNotOutput(resolve('/'), root)).toMatch(/project/);
      expect(whyNotOutput(join(root, 'package.json'), root)).toMatch(/file/);
      expect(whyNotOutput(other, root)).toBeUndefined();
      expect(whyNotOutput(join(other, 'new'), root)).toBeUndefined();
      writeFileSync(join(other, 'letter.txt'), 'kept');
      expect(whyNotOutput(other, root)).toMatch(/letter\.txt/);
      writeFileSync(join(other, SITE_MARK), '');
      expect(whyNotOutput(other, root)).toBeUndefined();
    } finally {
      rmSync(other, { recursive: true, force: true });
    }
  });
});

describe('the commands', () => {
  it.each([
    ['build.ts', '--all'],
    ['demo.ts', '--port=70000'],
    ['dev.ts', '--ports=1'],
  ])('%s %s is refused in one line', (command, argument) => {
    const run = spawnSync(process.execPath, ['--import', 'tsx', `plugins/command-line/${command}`, argument], {
      encoding: 'utf8',
    });
    expect(run).toMatchObject({ status: 2, stdout: '' });
    expect(run.stderr.trim().split('\n')).toHaveLength(1);
  });

  it('demo builds, serves, and ends when asked to', async () => {
    const demo = spawn(process.execPath, ['--import', 'tsx', 'plugins/command-line/demo.ts', '--port', '0'], {
      stdio: ['ignore', 'pipe', 'inherit'],
    });
    const ended = new Promise((done) => demo.on('exit', (status) => done(status)));
    const address = await new Promise<string>((found, failed) => {
      let said = '';
      demo.stdout.on('data', (chunk) => {
        said += chunk;
        const match = /http:\/\/127\.0\.0\.1:\d+\//.exec(said);
        if (match) found(match[0]);
      });
      demo.on('exit', () => failed(new Error(`no address in: ${said}`)));
    });
    const page = await fetch(address);
    expect(page.status).toBe(200);
    expect(await page.text()).toContain('<title>');
    demo.kill('SIGTERM');
    expect(await ended).toBe(0);
  });
});
