/** `npm run figures -- FILE.md [--json]`: solves one note outside the site and prints its figures. */
import { existsSync, readFileSync, statSync } from 'node:fs';
import { basename, dirname, join, relative, sep } from 'node:path';
import { SOLVER_VERSION } from '../../solver/solve.ts';
import { formatProblem, type Problem } from '../problems.ts';
import { quantityText, unitFor } from '../render/number-text.ts';
import type { FigureResult, SolvedNote } from '../results.ts';
import { createNoteReader } from '../site-model.ts';
import { fromCaller, PROJECT_ROOT, readArguments } from './project.ts';

const USAGE = 'npm run --silent figures -- FILE.md [--json]';

const { flags, files } = readArguments(process.argv.slice(2), { flags: ['json'], files: 1, usage: USAGE });
const json = flags.has('json');
const asked = files[0];
if (asked === undefined) fail('', 'no note was named', USAGE);
const file = fromCaller(asked);
const text = readText(file);
process.chdir(PROJECT_ROOT);
const solved = solveFile(file, text);
const results = solved.figureTables.flatMap((table) => table.results);
const hasError = solved.problems.some(({ severity }) => severity === 'error');
const broken = results.some(({ verdict }) => verdict !== undefined && verdict !== 'kept');
if (json) process.stdout.write(`${JSON.stringify(toJson(solved, results), null, 2)}\n`);
else {
  for (const problem of solved.problems) console.error(`${formatProblem(problem)}\n`);
  process.stdout.write(toText(results));
}
process.exitCode = hasError ? 2 : broken ? 1 : 0;

function fail(file: string, message: string, hint: string): never {
  if (json) {
    const problems = [{ file, line: 1, column: 1, message, hint }];
    process.stdout.write(
      `${JSON.stringify({ note: file, ok: false, figures: {}, problems, solver: { version: SOLVER_VERSION, analyses: {} } }, null, 2)}\n`,
    );
  } else console.error(`${file === '' ? '' : `${file}: `}${message}\nexpected: ${hint}`);
  process.exit(2);
}

function readText(path: string): string {
  if (!existsSync(path)) fail(asked!, 'there is no such file', 'the path of a note, a Markdown file');
  if (!statSync(path).isFile()) fail(asked!, 'this is a folder, not a note', 'the path of a note, a Markdown file');
  const bytes = readFileSync(path);
  try {
    const decoded = new TextDecoder('utf-8', { fatal: true }).decode(bytes);
    if (decoded.includes('\0')) throw new Error('binary');
    return decoded;
  } catch {
    return fail(asked!, 'this is not a text in UTF-8', 'a note saved as UTF-8 text');
  }
}

/** Reads and solves the note; other notes that it refers to are looked for beside it, then among the project's. */
function solveFile(path: string, text: string): SolvedNote {
  const inside = !relative(PROJECT_ROOT, path).startsWith('..');
  const shown = inside ? relative(PROJECT_ROOT, path).split(sep).join('/') : path;
  const id = basename(path).replace(/\.md$/i, '');
  const folders = [dirname(path), join(PROJECT_ROOT, 'content/notes')];
  const reader = createNoteReader({
    projectRoot: PROJECT_ROOT,
    partsFolder: join(PROJECT_ROOT, 'content/parts'),
    find: (other) => {
      if (other === id) return { file: shown, text };
      for (const folder of folders) {
        const candidate = join(folder, `${other}.md`);
        if (!/[/\\]/.test(other) && existsSync(candidate))
          return { file: candidate, text: readFileSync(candidate, 'utf8') };
      }
      return undefined;
    },
    ids: [],
  });
  return reader.solve(id)!;
}

function toJson(note: SolvedNote, figures: readonly FigureResult[]): object {
  const finite = (value: number | undefined): number | null =>
    value !== undefined && Number.isFinite(value) ? value : null;
  return {
    note: note.note.file,
    ok: !hasError && !broken,
    figures: Object.fromEntries(
      figures.map(({ figure, nominal, minimum, maximum, verdict }) => [
        figure.name,
        {
          value: finite(nominal?.value),
          unit: siUnitOf(figure.expression.dimension),
          uncertainty: finite(nominal?.uncertainty),
          min: finite(minimum?.value),
          max: finite(maximum?.value),
          mean: null,
          sd: null,
          verdict: verdict ?? null,
        },
      ]),
    ),
    problems: note.problems.map(problemToJson),
    solver: {
      version: SOLVER_VERSION,
      analyses: Object.fromEntries(
        note.analyses.map(({ block, runs }) => [
          block.name,
          {
            find: block.request.find,
            accuracy: block.accuracy,
            runs: runs.length,
            steps: runs.reduce((sum, { solution }) => sum + solution.effort.steps, 0),
            newtonIterations: runs.reduce((sum, { solution }) => sum + solution.effort.newtonIterations, 0),
            events: runs.reduce((sum, { solution }) => sum + solution.effort.events, 0),
            kirchhoff: Math.max(...runs.map(({ solution }) => solution.audit.kirchhoff)),
            tellegen: Math.max(...runs.map(({ solution }) => solution.audit.tellegen)),
            remarks: [...new Set(runs.flatMap(({ solution }) => solution.remarks))],
          },
        ]),
      ),
    },
  };
}

function problemToJson({ file, line, column, message, expected, example, severity }: Problem): object {
  const hint = [expected, example === undefined ? undefined : `for example: ${example}`].filter(
    (part) => part !== undefined,
  );
  return { file, line, column, message, hint: hint.join('; '), severity };
}

function siUnitOf(dimension: FigureResult['figure']['expression']['dimension']): string {
  return unitFor(undefined, dimension, 1).text;
}

function toText(figures: readonly FigureResult[]): string {
  const rows = figures.map(({ figure, nominal, minimum, maximum, verdict }) => {
    const unit = unitFor(figure.unit, figure.expression.dimension, Math.abs(nominal?.value ?? 0));
    const show = (measured: FigureResult['nominal']): string =>
      measured ? quantityText(measured, unit, figure.digits) : '–';
    const range = minimum && maximum ? `${show(minimum)} … ${show(maximum)}` : '';
    return [figure.name, show(nominal), range, figure.must?.text ?? '', verdict ?? ''];
  });
  const widths = [0, 1, 2, 3].map((column) => Math.max(0, ...rows.map((row) => [...row[column]!].length)));
  return rows
    .map(
      (row) =>
        `${row
          .map((cell, column) => cell + ' '.repeat(Math.max(0, (widths[column] ?? 0) - [...cell].length)))
          .join('  ')
          .trimEnd()}\n`,
    )
    .join('');
}
