/** The figures of one note, run as a user runs them: what is printed, and the exit status. */
import { spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, realpathSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { FiguresAsJson } from '../../../plugins/command-line/figures-output.ts';

let folder: string;

/** A capacitor charged through a resistor from 10 V, from rest; its time constant R C is 1 ms, or half and twice that where C1 is varied. */
const CHARGING = `# Charging

\`\`\`circuit charging
components:
  G1: { source: 10 V, nodes: [in, gnd] }
  R1: { resistor: 1 kΩ, nodes: [in, out] }
  C1: { capacitor: 1 µF, nodes: [out, gnd] }
\`\`\`

\`\`\`analysis step
find: time response
start: rest
until: 5 ms
\`\`\`

\`\`\`analysis family
find: time response
start: rest
until: 5 ms
vary: { C1: [1 µF, 500 nF, 2 µF] }
\`\`\`
`;

const figures = (lines: string): string => `\n\`\`\`figures\n${lines}\n\`\`\`\n`;

const NOTES = {
  'kept.md':
    CHARGING +
    figures(`from: step
at_one: { is: "at(out, 1 ms)", in: mV, must: 6.3 V .. 6.4 V, requirement: T-1 }
time_constant: { is: first(out > 6.3212 V), must: < 2 ms }
energy: { is: "at(C1.energy, 5 ms)", hidden: true }
attenuation: { is: "at(out, 1 ms) / 10 V" }
of_family: { is: "at(out, 1 ms) @ family" }`),
  'broken.md': CHARGING + figures('at_one: { is: "at(out, 1 ms) @ step", must: < 6 V }'),
  'close.md': CHARGING + figures('at_one: { is: "at(out, 1 ms) @ step", must: < 6.32120558828558 V }'),
  'warned.md': `# Empty\n\nNo figure here.\n`,
  'mistaken.md':
    CHARGING +
    figures(
      'sum: { is: "at(out, 1 ms) @ step + 1 mA", must: < 6 V }\nlow: { is: "at(out, 1 ms) @ step", must: < 6 V }',
    ),
  'unsolved.md': `# Nothing to be found

\`\`\`circuit
components:
  G1: { source: 1 V, nodes: [a, gnd] }
  G2: { source: 2 V, nodes: [a, gnd] }
\`\`\`

\`\`\`analysis op
find: operating point
\`\`\`
${figures('x: G1.i')}`,
  'referring.md': CHARGING + figures('twice: 2 * kept#at_one'),
  'referring-far.md': CHARGING + figures('far: line-lamp#lamp_peak'),
  'one.md': CHARGING + figures('x: other#x'),
  'other.md': CHARGING + figures('x: one#x'),
};

beforeAll(() => {
  folder = realpathSync(mkdtempSync(join(tmpdir(), 'figures-')));
  for (const [name, text] of Object.entries(NOTES)) writeFileSync(join(folder, name), text);
  writeFileSync(join(folder, 'binary.md'), Buffer.from([0x23, 0x20, 0xff, 0xfe, 0x00, 0x80]));
  mkdirSync(join(folder, 'folder.md'));
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

/** As npm runs it: in the project's folder, and told where the caller is. */
function run(...given: string[]): { status: number | null; stdout: string; stderr: string } {
  return spawnSync(process.execPath, ['--import', 'tsx', 'plugins/command-line/figures.ts', ...given], {
    encoding: 'utf8',
    env: { ...process.env, INIT_CWD: folder },
  });
}

function asJson(...given: string[]): { status: number | null; output: FiguresAsJson } {
  const { status, stdout, stderr } = run(...given, '--json');
  expect(stderr).toBe('');
  return { status, output: JSON.parse(stdout) as FiguresAsJson };
}

describe('a note whose limits are kept', () => {
  let kept: ReturnType<typeof asJson>;
  beforeAll(() => {
    kept = asJson('kept.md');
  });

  it('gives its figures in SI as JSON', () => {
    const { status, output } = kept;
    expect(status).toBe(0);
    expect(Object.keys(output)).toEqual(['note', 'ok', 'figures', 'problems', 'solver']);
    expect(output).toMatchObject({ note: join(folder, 'kept.md'), ok: true, problems: [] });
    const { at_one, time_constant, energy, attenuation, of_family } = output.figures;
    expect(Object.keys(at_one!)).toEqual(['value', 'unit', 'uncertainty', 'min', 'max', 'mean', 'sd', 'verdict']);
    // charging through a resistor: v(t) = V (1 - exp(-t / RC))
    const charged = (t: number, tau: number): number => 10 * (1 - Math.exp(-t / tau));
    const near = (value: number | null | undefined, expected: number): void =>
      expect(Math.abs(value! / expected - 1)).toBeLessThan(1e-4);
    near(at_one!.value, charged(1e-3, 1e-3));
    expect(at_one).toMatchObject({ unit: 'V', min: null, max: null, mean: null, sd: null, verdict: 'kept' });
    // absolute: the accuracy asked is 1e-4 of the value
    expect(at_one!.uncertainty).toBeGreaterThanOrEqual(0);
    expect(at_one!.uncertainty).toBeLessThan(1e-4 * 6.4);
    // solved for t: 10 V (1 - 1/e) = 6.3212 V is reached after R C
    near(time_constant!.value, -1e-3 * Math.log(1 - 0.63212));
    expect(time_constant!.unit).toBe('s');
    // C v² / 2, hidden on the page
    near(energy!.value, 0.5 * 1e-6 * charged(5e-3, 1e-3) ** 2);
    expect(energy).toMatchObject({ unit: 'J', verdict: null });
    near(attenuation!.value, charged(1e-3, 1e-3) / 10);
    expect(attenuation!.unit).toBe('');
    near(of_family!.value, charged(1e-3, 1e-3));
    near(of_family!.min, charged(1e-3, 2e-3));
    near(of_family!.max, charged(1e-3, 0.5e-3));
  });

  it('says how its analyses were solved', () => {
    const { solver } = kept.output;
    expect(solver.version).toMatch(/\S/);
    expect(Object.keys(solver.analyses)).toEqual(['step', 'family']);
    expect(Object.keys(solver.analyses.step!)).toEqual([
      'find',
      'accuracy',
      'steps',
      'newtonIterations',
      'events',
      'audit',
      'remarks',
    ]);
    expect(solver.analyses.step).toMatchObject({ find: 'time response', accuracy: 1e-4 });
    expect(solver.analyses.family!.steps).toBeGreaterThan(solver.analyses.step!.steps);
  });

  it('gives them as a table, in the units of the note', () => {
    const { status, stdout, stderr } = run('kept.md');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    const lines = stdout.trimEnd().split('\n');
    expect(lines).toHaveLength(5);
    expect(lines[0]).toMatch(/^at_one +6320\smV +must be 6\.3 V \.\. 6\.4 V +kept$/);
    expect(lines[4]).toMatch(/^of_family +6\.32\sV +3\.93\sV … 8\.65\sV$/);
    // in columns: every range begins where the others do
    expect(lines[0]!.indexOf('must be')).toBe(lines[1]!.indexOf('must be'));
  });
});

describe('the exit status', () => {
  it('is 1 for a limit that is broken', () => {
    const { status, output } = asJson('broken.md');
    expect(status).toBe(1);
    expect(output).toMatchObject({ ok: false, problems: [], figures: { at_one: { verdict: 'broken' } } });
  });

  it('is 1 for a limit that the accuracy cannot tell', () => {
    // the limit is 10 V (1 - 1/e), the value itself
    const { status, output } = asJson('close.md');
    expect(output).toMatchObject({ ok: false, figures: { at_one: { verdict: 'too close to call' } } });
    expect(status).toBe(1);
  });

  it('is 2 for a mistake, though a limit is broken besides', () => {
    const { status, output } = asJson('mistaken.md');
    expect(status).toBe(2);
    expect(output.ok).toBe(false);
    expect(output.problems).toHaveLength(1);
    const [problem] = output.problems;
    expect(Object.keys(problem!)).toEqual(['file', 'line', 'column', 'message', 'hint']);
    const line = NOTES['mistaken.md'].split('\n').findIndex((text) => text.startsWith('sum:')) + 1;
    expect(problem).toMatchObject({ file: join(folder, 'mistaken.md'), line });
    expect(output.figures.low).toMatchObject({ verdict: 'broken' });
    const { stderr } = run('mistaken.md');
    expect(stderr).toContain(`mistaken.md:${line}:`);
    expect(stderr).toMatch(/^ +\^+$/m);
  });

  it('is 2 where there is no solution', () => {
    const { status, output } = asJson('unsolved.md');
    expect(status).toBe(2);
    expect(output.problems.length).toBeGreaterThan(0);
  });

  it('is 0 for a note without figures', () => {
    expect(asJson('warned.md')).toMatchObject({ status: 0, output: { ok: true, figures: {} } });
  });
});

describe('the file', () => {
  it('is found from the caller’s folder and by its absolute path', () => {
    expect(asJson(join(folder, 'broken.md')).output).toEqual(asJson('./broken.md').output);
  });

  it('is named from the project’s root where it lies inside', () => {
    const { output } = asJson(resolve('content/notes/pair-characteristic.md'));
    expect(output.note).toBe('content/notes/pair-characteristic.md');
    expect(output.problems).toEqual([]);
  });

  it.each([
    ['missing.md', /no such file/],
    ['folder.md', /folder/],
    ['binary.md', /UTF-8/],
  ])('%s is refused', (name, reason) => {
    const { status, output } = asJson(name);
    expect(status).toBe(2);
    expect(output).toMatchObject({
      note: name,
      ok: false,
      figures: {},
      problems: [{ file: name, line: 1, column: 1 }],
    });
    expect(output.problems[0]!.message).toMatch(reason);
  });

  it('may refer to notes beside it and to the project’s', () => {
    const beside = asJson('referring.md');
    expect(beside.output.problems).toEqual([]);
    expect(beside.output.figures.twice!.value! / (20 * (1 - Math.exp(-1))) - 1).toBeCloseTo(0, 3);
    const far = asJson('referring-far.md');
    expect(far.output.problems).toEqual([]);
    expect(far.output.figures.far).toMatchObject({ unit: 'A' });
  });

  it('may not refer to one that refers back', () => {
    const { status, output } = asJson('one.md');
    expect(status).toBe(2);
    expect(output.problems).toHaveLength(1);
  });
});

describe('what is asked', () => {
  it.each([[[]], [['-j', 'kept.md']], [['kept.md', 'broken.md']]])('%j is refused', (given) => {
    const { status, stdout, stderr } = run(...given);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    expect(stderr).toContain('FILE.md [--json]');
  });

  it('is refused as JSON where JSON is asked for', () => {
    const { status, output } = asJson('--all', 'kept.md');
    expect(status).toBe(2);
    expect(output).toMatchObject({ ok: false, figures: {}, problems: [{ message: 'Unknown option --all.' }] });
  });

  it('is a file that is there', () => {
    expect(run('missing.md')).toMatchObject({ status: 2, stdout: '', stderr: expect.stringMatching(/no such file/) });
  });
});
