/** A wave from two columns of a CSV file: seconds, and volts or amperes. */
import { type CsvTable, numberOf, readCsv } from '../csv.ts';
import type { FieldValues } from '../fields.ts';
import { expectedName } from '../nearest.ts';
import { report } from '../passage.ts';
import type { YamlNode } from '../yaml-tree.ts';
import type { Surroundings } from './context.ts';
import type { WaveRead } from './waves.ts';

export function readCsvWave(values: FieldValues, repeat: boolean, surroundings: Surroundings): WaveRead | undefined {
  const fileNode = values.entries.get('file')!.value;
  const file = values.texts.get('file')!;
  const text = surroundings.text(fileNode, file);
  if (text === undefined) return undefined;
  const table = readCsv(text);
  const timeColumn = columnOf(table, values, 'time', fileNode);
  const valueColumn = columnOf(table, values, 'value', fileNode);
  if (timeColumn === undefined || valueColumn === undefined) return undefined;

  const complain = (message: string, expected: string) => {
    report(fileNode.passage, fileNode.place, { message: `\`${file}\`: ${message}`, expected });
    return undefined;
  };
  if (table.rows.length < 2) return complain('there are fewer than two rows of numbers', 'two rows at least');
  const times: number[] = [];
  const numbers: number[] = [];
  for (const { line, cells } of table.rows) {
    const time = numberOf(cells[timeColumn] ?? '');
    const value = numberOf(cells[valueColumn] ?? '');
    if (time === undefined || value === undefined) {
      const found = cells[time === undefined ? timeColumn : valueColumn] ?? '';
      return complain(
        `line ${line} has ${found === '' ? 'nothing' : `\`${found}\``} where a number is due`,
        'a number',
      );
    }
    if (times.length > 0 && time <= times.at(-1)!)
      return complain(`the time in line ${line} does not ascend`, 'ascending times');
    times.push(time);
    numbers.push(value);
  }
  return {
    wave: { shape: 'points', times, values: numbers, repeat },
    text: `${file}, ${times.length} points${repeat ? ', repeated' : ''}`,
  };
}

/** 0-based column by its number or heading. */
function columnOf(table: CsvTable, values: FieldValues, key: string, fileNode: YamlNode): number | undefined {
  const wanted = values.texts.get(key)!;
  const width = Math.max(table.headings?.length ?? 0, table.rows[0]?.cells.length ?? 0);
  const byHeading = table.headings?.indexOf(wanted) ?? -1;
  if (byHeading !== -1) return byHeading;
  const number = /^\d+$/.test(wanted) ? Number(wanted) : 0;
  if (number >= 1 && number <= width) return number - 1;
  const node = values.entries.get(key)?.value ?? fileNode;
  report(node.passage, node.place, {
    message: `the file has no column \`${wanted}\``,
    expected: table.headings ? expectedName(wanted, table.headings) : `a number from 1 to ${width}`,
  });
  return undefined;
}
