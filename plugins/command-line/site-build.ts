/** Building the site, whole or not at all: into a temporary folder beside the output, which is swapped in at the end. */
import { existsSync, mkdirSync, readdirSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { basename, dirname, join, relative } from 'node:path';
import Eleventy from '@11ty/eleventy';
import { notesOfLastBuild } from '../ohmfolio.ts';
import { formatProblem } from '../problems.ts';
import type { NoteEntry } from '../site-pages.ts';
import { SITE_MARK, whyNotOutput } from './output-folder.ts';
import { isRunning } from './running.ts';

export interface BuiltSite {
  readonly notes: readonly NoteEntry[];
  readonly seconds: number;
}

/**
 * Builds the site; the last one stays until the new one is whole. Throws where `output` holds something else than a site, and where a page
 * cannot be built; a note with problems is built with them on its page.
 */
export async function buildSite(options: {
  /** Absolute; the working directory must be it. */
  readonly projectRoot: string;
  /** Absolute. */
  readonly output: string;
}): Promise<BuiltSite> {
  const { projectRoot, output } = options;
  const refusal = whyNotOutput(output, projectRoot);
  if (refusal !== undefined)
    throw new Error(`${output} would be replaced, and ${refusal}. Name a folder for the site alone.`);
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
    // the summary of the build is ours
    eleventy.disableLogger();
    await eleventy.write();
    writeFileSync(join(temporary, SITE_MARK), '');
    swapIn(temporary, output);
  } finally {
    rmSync(temporary, { recursive: true, force: true });
  }
  return { notes: notesOfLastBuild(), seconds: (performance.now() - started) / 1000 };
}

function swapIn(built: string, output: string): void {
  const old = `${output}.old-${process.pid}`;
  rmSync(old, { recursive: true, force: true });
  if (existsSync(output)) renameSync(output, old);
  try {
    renameSync(built, output);
  } catch (error) {
    // another build was quicker, or the old site goes back to its place
    if (existsSync(old) && !existsSync(output)) renameSync(old, output);
    throw error;
  } finally {
    rmSync(old, { recursive: true, force: true });
  }
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

/** Prints every problem in full, then one line on the whole; the exit status that the build deserves. */
export function reportBuild({ notes, seconds }: BuiltSite): 0 | 2 {
  let errors = 0;
  let warnings = 0;
  let broken = 0;
  let figures = 0;
  let analyses = 0;
  for (const { solved, problems } of notes) {
    const { note } = solved;
    for (const problem of problems) {
      console.error(`${formatProblem(problem)}\n`);
      if (problem.severity === 'error') errors++;
      else warnings++;
    }
    analyses += solved.analyses.length;
    for (const { results } of solved.figureTables) {
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
    `${count(notes.length, 'note')}, ${analyses} solved ${analyses === 1 ? 'analysis' : 'analyses'}, ${count(figures, 'figure')}, ` +
      `${count(broken, 'limit')} not kept, ${count(errors, 'problem')}${warnings > 0 ? `, ${count(warnings, 'warning')}` : ''}, ${seconds.toFixed(1)} s`,
  );
  return errors > 0 ? 2 : 0;
}
