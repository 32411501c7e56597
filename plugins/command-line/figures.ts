/** `npm run figures -- FILE.md [--json]`: solves one note outside the site and prints its figures. */
import { SOLVER_VERSION } from '../../solver/solve.ts';
import { formatProblem, sortProblems } from '../problems.ts';
import { figuresAsJson, figuresAsText, outcomeOf, type ProblemAsJson } from './figures-output.ts';
import { PROJECT_ROOT, readArguments, reasonOf } from './project.ts';
import { readNoteFile, solveFile } from './solve-file.ts';

const USAGE = 'npm run --silent figures -- FILE.md [--json]';

const asked = process.argv.slice(2);
const json = asked.includes('--json');
const { files } = readArguments(asked, { flags: ['json'], files: 1, usage: USAGE }, (reason) =>
  refuse({ file: '', message: reason, hint: USAGE }),
);
const [file] = files;
if (file === undefined) refuse({ file: '', message: 'No note was named.', hint: USAGE });

try {
  const read = readNoteFile(file);
  if ('message' in read) refuse({ file, ...read });
  process.chdir(PROJECT_ROOT);
  const solved = solveFile(read);
  if (json) print(figuresAsJson(solved));
  else {
    for (const problem of sortProblems(solved.problems, solved.note.file)) console.error(`${formatProblem(problem)}\n`);
    process.stdout.write(figuresAsText(solved));
  }
  process.exitCode = outcomeOf(solved);
} catch (error) {
  refuse({
    file,
    message: `Internal error: ${reasonOf(error)}`,
    hint: 'this is a fault of the program, not of the note',
  });
}

/** Ends the command where there is nothing to solve. */
function refuse({ file, message, hint }: Pick<ProblemAsJson, 'file' | 'message' | 'hint'>): never {
  if (json) {
    const problems: readonly ProblemAsJson[] = [{ file, line: 1, column: 1, message, hint }];
    print({ note: file, ok: false, figures: {}, problems, solver: { version: SOLVER_VERSION, analyses: {} } });
  } else console.error(`${file === '' ? '' : `${file}: `}${message}\n  expected: ${hint}`);
  process.exit(2);
}

function print(value: object): void {
  process.stdout.write(`${JSON.stringify(value, null, 2)}\n`);
}
