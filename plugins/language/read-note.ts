/** A note's text to a checked note: the one way in to the language stage. */
import { basename, dirname, join, resolve } from 'node:path';
import type { CheckContext } from '../expressions/context.ts';
import { fileText, type Problem, problemAt, sortProblems } from '../problems.ts';
import { type AnalysisReading, FINDS, readAnalysisBlock } from './analysis-block.ts';
import { type CircuitReading, readCircuitBlock } from './circuit-block.ts';
import { type Fence, type NoteParts, takeApart } from './fences.ts';
import { readFiguresBlock } from './figures-block.ts';
import { readInlineValues } from './inline-values.ts';
import type { Block, Note } from './model.ts';
import { list } from './nearest.ts';
import { readPlotBlock } from './plot-block.ts';
import { noteScope } from './scope.ts';
import { checkStructure } from './structure.ts';
import { surroundingsOf } from './surroundings.ts';
import { readTitleBlock } from './title-block.ts';
import { readYaml, reportRepeatedKeys } from './yaml-tree.ts';

export interface ReadOptions {
  /** Path as messages name it; resolved against the project's root it is where the note lies. */
  readonly file: string;
  /** Absolute. */
  readonly projectRoot: string;
  /** Absolute; default `content/parts` of the project. */
  readonly partsFolder?: string;
  /** Figures of other notes, `other-note#lamp_mean`. */
  readonly otherNotes?: Pick<CheckContext, 'foreignFigure' | 'notes'>;
}

/** Reads a note. Everything that is wrong with it is in `problems`, in the order of its lines; nothing is thrown for it. */
export function readNote(text: string, options: ReadOptions): Note {
  const { file, projectRoot } = options;
  const problems: Problem[] = [];
  const dependencies = new Set<string>();
  const source = fileText(file, text);
  const id = basename(file).replace(/\.md$/i, '');
  const noteFolder = dirname(resolve(projectRoot, file));
  const partsFolder = options.partsFolder ?? join(projectRoot, 'content', 'parts');
  const surroundings = surroundingsOf({ projectRoot, noteFolder, partsFolder }, problems, dependencies);

  // 1. Take apart: front matter, fences, computed values in the prose.
  const parts = takeApart(source, problems);
  const frontMatter = parts.frontMatter && readYaml(parts.frontMatter);
  if (frontMatter) reportRepeatedKeys(frontMatter);
  const titleBlock = readTitleBlock(frontMatter, parts.heading ?? id);
  reportDuplicateBlocks(parts.fences);
  reportBlocksToCome(parts.fences);

  // 2. Circuits, then the analyses that name them, then what each analysis needs of its circuit's structure.
  const circuits = firstOfEach(parts.fences, 'circuit').map((fence) => readCircuitBlock(fence, surroundings));
  const read = firstOfEach(parts.fences, 'analysis').map((fence) => readAnalysisBlock(fence, circuits));
  const faulty = new Set(
    circuits.filter((circuit) => circuit.block && !checkStructure(circuit, needsOperatingPoint(circuit, read))),
  );
  const sound = circuits.map((circuit) => (faulty.has(circuit) ? { ...circuit, block: undefined } : circuit));
  const analyses = read.map((analysis) =>
    analysis.circuit && faulty.has(analysis.circuit) ? { ...analysis, block: undefined } : analysis,
  );

  // 3. Everything that holds expressions: figures in order, since one may use those above it, then plots and prose.
  const scope = noteScope(sound, analyses, options.otherNotes ?? {});
  const figureNames = new Map<string, number>();
  const named = withUniqueNames(parts.fences);
  const figures = named.flatMap(({ fence, name }) =>
    fence.kind === 'figures' ? [readFiguresBlock(fence, name, scope, figureNames)] : [],
  );
  const plots = named.flatMap(({ fence, name }) => (fence.kind === 'plot' ? [readPlotBlock(fence, name, scope)] : []));
  const inlineValues = readInlineValues(parts.directives, scope);

  const blocks: readonly (Block | undefined)[] = [
    ...sound.map((circuit) => circuit.block),
    ...analyses.map((analysis) => analysis.block),
    ...figures,
    ...plots,
  ];
  return {
    file,
    id,
    text,
    titleBlock,
    blocks: blocks.filter((block) => block !== undefined).sort((left, right) => left.line - right.line),
    inlineValues,
    problems: sortProblems(withoutRepeats(problems), file),
    dependencies: [...dependencies].sort(),
  };
}

/** Whether an analysis of the circuit begins with an operating point; so does a circuit without analyses, one day. */
function needsOperatingPoint(circuit: CircuitReading, analyses: readonly AnalysisReading[]): boolean {
  const own = analyses.filter((analysis) => analysis.circuit === circuit);
  const startsByItself = ({ block }: AnalysisReading) =>
    block?.request.find === 'time response' && block.request.start !== 'operating point';
  // An analysis that could not be read says nothing about where it starts: it is not held against the circuit.
  const readable = own.filter((analysis) => analysis.block);
  return readable.length === 0 ? own.length === 0 : !readable.every(startsByItself);
}

function firstOfEach(fences: readonly Fence[], kind: Fence['kind']): Fence[] {
  return fences.filter(
    (fence, index) =>
      fence.kind === kind && fences.findIndex((other) => other.kind === kind && other.name === fence.name) === index,
  );
}

/** Circuits and analyses are referred to by their names; plots and figures without a name are numbered. */
function reportDuplicateBlocks(fences: readonly Fence[]): void {
  for (const [index, fence] of fences.entries()) {
    const first = fences.slice(0, index).find((other) => other.kind === fence.kind && other.name === fence.name);
    const unnamed = fence.name === fence.kind;
    const referredTo = fence.kind === 'circuit' || fence.kind === 'analysis';
    if (!first || (unnamed && !referredTo)) continue;
    fence.body.problems.push(
      problemAt(fence.body.file, fence.namePlace, {
        message: unnamed
          ? `a second block \`${fence.kind}\` has no name either: the first opens in line ${first.line}`
          : `a block \`${fence.kind} ${fence.name}\` opens already in line ${first.line}`,
        expected: 'a name of its own after the kind',
        example: `\`\`\`${fence.kind} second`,
      }),
    );
  }
}

function reportBlocksToCome(fences: readonly Fence[]): void {
  for (const fence of fences) {
    if (fence.kind !== 'measured' && fence.kind !== 'sizing') continue;
    fence.body.problems.push(
      problemAt(
        fence.body.file,
        { line: fence.line, column: fence.namePlace.column, length: fence.namePlace.length },
        {
          message: `this version does not read the block \`${fence.kind}\` yet`,
          expected: `one of ${list(['circuit', 'analysis', 'plot', 'figures'], 'or')}; analyses find ${list(FINDS)}`,
        },
      ),
    );
  }
}

function withUniqueNames(fences: NoteParts['fences']): { fence: Fence; name: string }[] {
  const taken = new Set<string>();
  return fences.map((fence) => {
    let name = fence.name;
    for (let number = 2; taken.has(`${fence.kind} ${name}`); number++) name = `${fence.name}-${number}`;
    taken.add(`${fence.kind} ${name}`);
    return { fence, name };
  });
}

/** A part that two components share is read twice, and its problems are found twice. */
function withoutRepeats(problems: readonly Problem[]): Problem[] {
  const seen = new Set<string>();
  return problems.filter(({ file, line, column, message }) => {
    const key = JSON.stringify([file, line, column, message]);
    return !seen.has(key) && seen.add(key);
  });
}
