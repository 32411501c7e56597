/** What is saved is seen, in whichever way an editor saves. */
import { mkdirSync, mkdtempSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterEach, beforeEach, expect, it, vi } from 'vitest';
import { type FolderWatch, watchFolders } from '../../../plugins/command-line/watch-folders.ts';

let folder: string;
let watched: FolderWatch;
let changes: string[];

beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'watch-'));
  mkdirSync(join(folder, 'notes'));
  writeFileSync(join(folder, 'notes/lamp.md'), 'first');
  changes = [];
  watched = watchFolders([folder, join(folder, 'missing')], (_, name) => changes.push(name));
});

afterEach(() => {
  watched.close();
  rmSync(folder, { recursive: true, force: true });
});

async function isSeen(name: string, change: () => void): Promise<void> {
  await new Promise((done) => setTimeout(done, 50));
  changes.length = 0;
  change();
  await vi.waitFor(() => expect(changes).toContain(name), { timeout: 5000 });
}

it('sees a file that is put in the place of the old one, again and again', async () => {
  const file = join(folder, 'notes/lamp.md');
  for (let round = 0; round < 3; round++) {
    await isSeen('lamp.md', () => {
      writeFileSync(`${file}~`, `round ${round}`);
      renameSync(`${file}~`, file);
    });
    await isSeen('lamp.md', () => writeFileSync(file, `in place ${round}`));
  }
});

it('sees files of folders that were made, or removed and made again, meanwhile', async () => {
  const made = join(folder, 'notes/measured');
  for (let round = 0; round < 2; round++) {
    await isSeen('measured', () => mkdirSync(made));
    await isSeen('data.csv', () => writeFileSync(join(made, 'data.csv'), '1'));
    await isSeen('data.csv', () => writeFileSync(join(made, 'data.csv'), '2'));
    await isSeen('measured', () => rmSync(made, { recursive: true }));
  }
});
