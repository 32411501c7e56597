/** Building the site, whole or not at all: into a temporary folder beside the output, which is swapped in at the end. */
import { existsSync, mkdirSync, readdirSync, renameSync, rmSync } from 'node:fs';
import { basename, dirname, join, relative } from 'node:path';
import Eleventy from '@11ty/eleventy';
import { formatProblem } from '../problems.ts';
import { lastSiteModel, type SiteModel } from '../site-model.ts';

export interface BuiltSite {
  readonly model: SiteModel;
  readonly seconds: number;
}

export async function buildSite(options: {
  /** Absolute; the working directory must be it. */
  readonly projectRoot: string;
  /** Absolute. */
  readonly output: string;
  readonly quiet?: boolean;
}): Promise<BuiltSite> {
  const { projectRoot, output } = options;
  const started = performance.now();
  removeLeftovers(output);
  const temporary = `${output}.building-${process.pid}`;
  rmSync(temporary, { recursive: true, force: true });
  mkdirSync(dirname(output), { recursive: true });
  try {
    const eleventy = new Eleventy('site/pages', relative(projectRoot, temporary), {
      configPath: join(projectRoot, 'eleventy.config.ts'),
      quietMode: true,
    });
    await eleventy.write();
    swapIn(temporary, output);
  } finally {
    rmSync(temporary, { recursive: true, force: true });
  }
  const model = lastSiteModel();
  if (!model) throw new Error('Internal error: the build read no notes');
  return { model, seconds: (performance.now() - started) / 1000 };
}

function swapIn(built: string, output: string): void {
  const old = `${output}.old-${process.pid}`;
  if (!existsSync(built)) throw new Error('Internal error: the build wrote nothing');
  if (existsSync(output)) renameSync(output, old);
  renameSync(built, output);
  rmSync(old, { recursive: true, force: true });
}

/** What a killed build left behind: the temporary folders of processes that are gone; a site that was moved aside comes back. */
function removeLeftovers(output: string): void {
  const folder = dirname(output);
  if (!existsSync(folder)) return;
  for (const name of readdirSync(folder)) {
    const match = new RegExp(`^${escapeRegExp(basename(output))}\\.(building|old)-(\\d+)$`).exec(name);
    if (!match || isRunning(Number(match[2]))) continue;
    const path = join(folder, name);
    if (match[1] === 'old' && !existsSync(output)) renameSync(path, output);
    else rmSync(path, { recursive: true, force: true });
  }
}

function escapeRegExp(text: string): string {
  return text.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
}

function isRunning(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch {
    return false;
  }
}

/** Prints every problem in full, then one line on the whole; the exit status that the build deserves. */
export function reportBuild({ model, seconds }: BuiltSite): 0 | 2 {
  let errors = 0;
  let warnings = 0;
  let broken = 0;
  let figures = 0;
  let analyses = 0;
  for (const { note, problems, figureTables, analyses: solved } of model.notes) {
    for (const problem of problems) {
      console.error(`${formatProblem(problem)}\n`);
      if (problem.severity === 'error') errors++;
      else warnings++;
    }
    analyses += solved.length;
    for (const { results } of figureTables) {
      figures += results.length;
      for (const { figure, verdict } of results) {
        if (verdict !== 'broken' && verdict !== 'too close to call') continue;
        broken++;
        console.error(
          `${note.file}:${figure.place.line}: limit ${verdict}: ${figure.name} must be ${figure.must?.text ?? ''}`,
        );
      }
    }
  }
  const count = (number: number, word: string): string => `${number} ${word}${number === 1 ? '' : 's'}`;
  console.log(
    `${count(model.notes.length, 'note')}, ${count(analyses, 'solved analysis').replace('analysiss', 'analyses')}, ${count(figures, 'figure')}, ` +
      `${count(broken, 'limit')} not kept, ${count(errors, 'problem')}${warnings > 0 ? `, ${count(warnings, 'warning')}` : ''}, ${seconds.toFixed(1)} s`,
  );
  return errors > 0 ? 2 : 0;
}
