/** `npm run bench [-- NAME] [--json]`: benchmarks by name, all of them without one. They never decide a test. */
import { readArguments } from '../../plugins/command-line/project.ts';
import { benchIntegratorChoice } from './integrator-choice.ts';
import { benchLinearAlgebra } from './linear-algebra.ts';
import { createReport, type Report } from './report.ts';
import { benchTimeResponse } from './time-response.ts';

const BENCHMARKS: { readonly [name: string]: (report: Report) => void } = {
  'time-response': benchTimeResponse,
  'linear-algebra': benchLinearAlgebra,
  'integrator-choice': benchIntegratorChoice,
};

const usage = `npm run bench [-- NAME] [--json], NAME one of ${Object.keys(BENCHMARKS).join(', ')}`;
const { flags, files } = readArguments(process.argv.slice(2), { flags: ['json'], files: 1, usage });
const name = files[0];
if (name !== undefined && !Object.hasOwn(BENCHMARKS, name)) {
  console.error(`There is no benchmark '${name}'.\nUsage: ${usage}`);
  process.exit(2);
}
const report = createReport(flags.has('json'));
for (const [key, bench] of Object.entries(BENCHMARKS)) if (name === undefined || name === key) bench(report);
