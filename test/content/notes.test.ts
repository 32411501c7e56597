/** The demonstration notes are whole: nothing is wrong in them, every number has a value, every limit is kept. */
import { readdirSync, readFileSync } from 'node:fs';
import { load } from 'js-yaml';
import { describe, expect, test } from 'vitest';
import { formatProblem } from '../../plugins/problems.ts';
import { noteFiles, projectRoot, solvedNote } from './solved-notes.ts';

const ids = noteFiles.map((file) => file.replace(/\.md$/, ''));

describe.each(ids)('%s', (id) => {
  test('reads and solves without problems', () => {
    expect(solvedNote(id).problems.map(formatProblem)).toEqual([]);
  });

  test('has a complete title block', () => {
    const { titleBlock } = solvedNote(id).note;
    expect(titleBlock.number).toMatch(/^SW-\d+$/);
    expect(titleBlock.revision).toMatch(/^[A-Z]$/);
    expect(titleBlock.author).toBeTruthy();
    expect(titleBlock.date).toMatch(/^\d{4}-\d{2}-\d{2}$/);
    expect(titleBlock.reviewers.length).toBeGreaterThan(0);
  });

  test('every figure, plot and number of the prose has a value', () => {
    const { note, figureTables, plots, inlineValues } = solvedNote(id);
    const lacking = figureTables.flatMap(({ results }) => results.filter(({ nominal }) => !nominal));
    expect(lacking.map(({ figure }) => figure.name)).toEqual([]);
    expect(inlineValues.filter(({ measured }) => !measured)).toEqual([]);
    expect(plots.length).toBe(note.blocks.filter(({ kind }) => kind === 'plot').length);
    expect(plots.length).toBeGreaterThan(0);
  });

  test('every figure keeps its limits, and says which requirement or rating they come from', () => {
    const limited = solvedNote(id).figureTables.flatMap(({ results }) => results.filter(({ figure }) => figure.must));
    expect(limited.length).toBeGreaterThan(0);
    for (const { figure, verdict } of limited) {
      expect(`${figure.name}: ${verdict}`).toBe(`${figure.name}: kept`);
      expect(figure.requirement ?? figure.must?.text).toMatch(/^GP-\d+$|rating/);
    }
  });

  test('every requirement that is listed is mentioned by a figure or in the conclusion', () => {
    const { text } = solvedNote(id).note;
    const listed = [...text.matchAll(/^\| (GP-\d+) \|/gm)].map(([, requirement]) => requirement!);
    const judged = new Set([...text.matchAll(/requirement: (GP-\d+)/g)].map(([, requirement]) => requirement!));
    expect(listed.filter((requirement) => !judged.has(requirement))).toEqual([]);
  });
});

test('numbers of notes are unique', () => {
  const numbers = ids.map((id) => solvedNote(id).note.titleBlock.number);
  expect(new Set(numbers).size).toBe(numbers.length);
});

test('every status occurs', () => {
  const statuses = new Set(ids.map((id) => solvedNote(id).note.titleBlock.status));
  expect([...statuses].sort()).toEqual(['draft', 'in review', 'released']);
});

test.each(readdirSync(`${projectRoot}/content/parts`))('part %s says that its data are invented', (file) => {
  const part = load(readFileSync(`${projectRoot}/content/parts/${file}`, 'utf8')) as { [key: string]: unknown };
  expect(part.part).toBe(file.replace(/\.yaml$/, ''));
  expect(part.source).toBe('demo data, invented');
  expect(part.description).toBeTruthy();
});
