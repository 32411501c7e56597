/**
 * The Eleventy plugin: before each build every note is read, solved and rendered; the pages' data is then `ohmfolio.notes`, and the files beside the
 * pages (plot data, specifications) are written after the build.
 */
import { mkdirSync, writeFileSync } from 'node:fs';
import { dirname, join, resolve } from 'node:path';
import type UserConfig from '@11ty/eleventy/UserConfig';
import { plotStyles } from './render/plot-styles.ts';
import { buildSiteModel } from './site-model.ts';
import { type NoteEntry, renderSite } from './site-pages.ts';

export interface OhmfolioOptions {
  /** Folder that paths in messages are relative to. Default: the working directory. */
  readonly projectRoot?: string;
  /** Folder of the notes, relative to the project's root. Default: `content/notes`. */
  readonly notes?: string;
  /** Folder of the parts. Default: `content/parts`. */
  readonly parts?: string;
  /** What to watch besides, while serving. Default: `content`. */
  readonly watch?: readonly string[];
}

let lastNotes: readonly NoteEntry[] = [];

/** What the pages of this process's last build were made from. */
export function notesOfLastBuild(): readonly NoteEntry[] {
  return lastNotes;
}

export function ohmfolio(eleventyConfig: UserConfig, options: OhmfolioOptions = {}): void {
  eleventyConfig.versionCheck('>=3.0');
  const projectRoot = resolve(options.projectRoot ?? '.');
  const folders = {
    projectRoot,
    notesFolder: join(projectRoot, options.notes ?? 'content/notes'),
    partsFolder: join(projectRoot, options.parts ?? 'content/parts'),
  };
  let notes: NoteEntry[] = [];
  eleventyConfig.on('eleventy.before', async () => {
    notes = await renderSite(buildSiteModel(folders));
    lastNotes = notes;
  });
  eleventyConfig.addGlobalData('ohmfolio', () => ({ notes, plotStyles: plotStyles() }));
  eleventyConfig.on('eleventy.after', ({ directories }: { directories: { output: string } }) => {
    for (const { id, page } of notes) {
      for (const { name, content } of page.files) {
        const target = join(directories.output, 'notes', id, name);
        mkdirSync(dirname(target), { recursive: true });
        writeFileSync(target, content);
      }
    }
  });
  for (const folder of options.watch ?? ['content']) eleventyConfig.addWatchTarget(folder);
}

export default ohmfolio;
