/** What the installed packages must fit: the lock file's content, Node's version, the machine's platform. */
export function stampOf(lockFile: string | Uint8Array, nodeVersion: string, platform: string): string;
