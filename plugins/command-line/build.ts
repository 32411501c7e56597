/**
 * `npm run build`: the site into `_site`. Exit status 2 when a note has a problem (the site is there, the problem on the note's page), 1 when
 * no site could be built (the last one stays).
 */
import { join } from 'node:path';
import { fromCaller, PROJECT_ROOT, readArguments, reasonOf, stop } from './project.ts';
import { buildSite, reportBuild } from './site-build.ts';

const { values } = readArguments(process.argv.slice(2), {
  values: ['output'],
  files: 0,
  usage: 'npm run build [-- --output DIR]',
});
const stated = values.get('output');
process.chdir(PROJECT_ROOT);
const output = stated === undefined ? join(PROJECT_ROOT, '_site') : fromCaller(stated);
try {
  process.exitCode = reportBuild(await buildSite({ projectRoot: PROJECT_ROOT, output }));
} catch (error) {
  stop(1, `The site could not be built: ${reasonOf(error)}`);
}
