/** Which folders a build may replace: never one that holds anything but a site. */
import { existsSync, readdirSync, statSync } from 'node:fs';
import { join, relative, sep } from 'node:path';

/** Written into every site, so that the next build knows the folder as one. */
export const SITE_MARK = '.ohmfolio-site';

/** The folder of the project that is for the site alone. */
const USUAL_OUTPUT = '_site';

/** Why a site must not be built to `output` (absolute), if so: it would replace something that is not a site. */
export function whyNotOutput(output: string, projectRoot: string): string | undefined {
  const fromOutput = relative(output, projectRoot);
  if (fromOutput === '' || isInside(fromOutput)) return 'it holds the project itself';
  const fromProject = relative(projectRoot, output);
  if (fromProject === USUAL_OUTPUT || !existsSync(output)) return undefined;
  if (!statSync(output).isDirectory()) return 'it is a file';
  const names = readdirSync(output);
  if (names.length === 0 || existsSync(join(output, SITE_MARK))) return undefined;
  return `it holds something else than a site (${names[0]})`;
}

/** Whether a relative path stays below where it starts (on Windows it may be absolute: another drive). */
function isInside(path: string): boolean {
  return path !== '..' && !path.startsWith(`..${sep}`) && !/^[A-Za-z]:|^[/\\]/.test(path);
}
