/** Watching folders with all that is below them. */
import { type FSWatcher, readdirSync, statSync, watch } from 'node:fs';
import { join } from 'node:path';

export interface FolderWatch {
  readonly close: () => void;
}

/**
 * Calls `changed` at every change below the folders, with the folder where it was. Each folder has a watch of its own: Node's recursive one watches
 * single files on Linux, and loses a file that an editor saves by putting a new one in its place.
 */
export function watchFolders(folders: readonly string[], changed: (folder: string, name: string) => void): FolderWatch {
  const watches = new Map<string, { readonly watcher: FSWatcher; readonly inode: number }>();

  const drop = (folder: string): void => {
    watches.get(folder)?.watcher.close();
    watches.delete(folder);
  };
  const add = (folder: string): void => {
    const inode = statSync(folder, { throwIfNoEntry: false })?.ino;
    if (inode === undefined) return;
    if (watches.get(folder)?.inode !== inode) {
      drop(folder);
      const watcher = watch(folder, (event, name) => {
        if (event === 'rename') refresh(folder);
        changed(folder, name ?? '');
      });
      // a folder that was removed
      watcher.on('error', () => drop(folder));
      watches.set(folder, { watcher, inode });
    }
    for (const entry of readdirSync(folder, { withFileTypes: true })) {
      if (entry.isDirectory()) add(join(folder, entry.name));
    }
  };
  const refresh = (folder: string): void => {
    for (const path of [...watches.keys()]) {
      if (path.startsWith(folder) && !statSync(path, { throwIfNoEntry: false })) drop(path);
    }
    try {
      add(folder);
    } catch {
      // gone between two looks: its parent's watch tells
    }
  };
  for (const folder of folders) refresh(folder);
  return { close: () => [...watches.keys()].forEach(drop) };
}
