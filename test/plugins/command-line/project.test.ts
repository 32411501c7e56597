/** What commands are given. */
import { describe, expect, it } from 'vitest';
import { type Arguments, readArguments } from '../../../plugins/command-line/project.ts';

function read(...argv: string[]): Arguments {
  return readArguments(
    argv,
    { flags: ['json'], values: ['output'], files: 1, usage: 'npm run command' },
    (reason): never => {
      throw new Error(reason);
    },
  );
}

describe('arguments', () => {
  it('may come in any order, values behind a blank or an equals sign', () => {
    for (const argv of [
      ['--output', 'a=b', 'note.md', '--json'],
      ['--json', 'note.md', '--output=a=b'],
    ]) {
      const { flags, values, files } = read(...argv);
      expect([[...flags], [...values], files]).toEqual([['json'], [['output', 'a=b']], ['note.md']]);
    }
  });

  it.each([
    [['--all'], 'Unknown option --all.'],
    [['-j'], 'Unknown option -j.'],
    [['--'], 'Unknown option --.'],
    [['--json=yes'], 'Unknown option --json=yes.'],
    [['--output'], '--output needs a value.'],
    [['--output='], '--output needs a value.'],
    [['a.md', 'b.md'], 'Unknown argument b.md.'],
  ])('%j is refused', (argv, reason) => {
    expect(() => read(...argv)).toThrow(reason);
  });
});
