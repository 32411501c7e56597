/** What an analysis asks of the solver: the keys that belong to its `find`. */
import type { AnalysisRequest, StartingState } from '../../solver/analysis.ts';
import type { Circuit } from '../../solver/circuit.ts';
import * as dues from './dues.ts';
import { type FieldValues, readScalar } from './fields.ts';
import { reportNoSuch } from './no-such-component.ts';
import { report } from './passage.ts';
import type { YamlEntry } from './yaml-tree.ts';

export type Find = AnalysisRequest['find'];

const MOST_POINTS = 100_000;

/** Builds the request; nothing where a key has a problem. Names are checked where the circuit is known. */
export function readRequest(
  find: Find,
  values: FieldValues,
  circuit: Circuit | undefined,
): AnalysisRequest | undefined {
  if (find === 'operating point') return { find };
  if (find === 'characteristic') return readCharacteristic(values, circuit);
  if (find === 'steady state') {
    const period = values.quantities.get('period')?.value;
    return { find, ...(period === undefined ? {} : { period }) };
  }
  const until = values.quantities.get('until')?.value;
  const from = values.quantities.get('from')?.value;
  const startEntry = values.entries.get('start');
  const start = startEntry ? readStart(startEntry, circuit) : 'operating point';
  if (until === undefined || from === undefined || !start) return undefined;
  if (from >= until) {
    const node = values.entries.get('from')!.value;
    report(node.passage, node.place, { message: '`from` is not before `until`', expected: 'an earlier time' });
    return undefined;
  }
  return { find, until, from, start };
}

function readCharacteristic(values: FieldValues, circuit: Circuit | undefined): AnalysisRequest | undefined {
  const pointsScalar = values.quantities.get('points');
  let points = pointsScalar?.value;
  if (points !== undefined && (!Number.isInteger(points) || points < 2 || points > MOST_POINTS)) {
    const node = values.entries.get('points')!.value;
    report(node.passage, node.place, {
      message: `\`${pointsScalar!.text}\` is not a number of points`,
      expected: `a whole number from 2 to ${MOST_POINTS}`,
    });
    points = undefined;
  }
  const sweep = values.entries.get('sweep')?.value;
  if (!sweep) return undefined;
  const only = sweep.type === 'mapping' && sweep.entries.length === 1 ? sweep.entries[0]! : undefined;
  if (only?.value.type !== 'sequence' || only.value.items.length !== 2) {
    report(sweep.passage, only?.value.place ?? sweep.place, {
      message: '`sweep` does not state one source and the two ends of its range',
      expected: 'a designator and two values',
      example: 'sweep: { G1: [-5 V, 5 V] }',
    });
    return undefined;
  }
  if (!circuit) return undefined;
  const sources = circuit.components.filter(({ kind }) => kind === 'source' || kind === 'current-source');
  const source = sources.find((component) => component.designator === only.key);
  if (!source) {
    reportNoSuch(only, circuit, sources, 'a source');
    return undefined;
  }
  const due = source.kind === 'source' ? dues.VOLTAGE : dues.CURRENT;
  const [from, to] = only.value.items.map((item) => readScalar(item, due, undefined, only.key)?.value);
  if (from === undefined || to === undefined || points === undefined) return undefined;
  if (from === to) {
    report(sweep.passage, only.value.place, {
      message: 'the range of the sweep is empty',
      expected: 'two different values',
    });
    return undefined;
  }
  return { find: 'characteristic', sweep: source.designator, from, to, points };
}

function readStart(entry: YamlEntry, circuit: Circuit | undefined): StartingState | undefined {
  const { value } = entry;
  if (value.type === 'scalar') {
    const text = value.text.trim();
    if (text === 'rest' || text === 'operating point') return text;
  }
  if (value.type !== 'mapping') {
    report(value.passage, value.place, {
      message: value.type === 'scalar' ? `\`${value.text.trim()}\` is not a start` : '`start` is a list',
      expected: '`operating point`, `rest`, or the voltages of capacitors and currents of inductors',
      example: 'start: { C1: 5 V }',
    });
    return undefined;
  }
  if (!circuit) return undefined;
  const storing = circuit.components.filter(({ kind }) => kind === 'capacitor' || kind === 'inductor');
  const state: [string, number][] = [];
  let ok = true;
  for (const item of value.entries) {
    const component = storing.find((candidate) => candidate.designator === item.key);
    if (!component) reportNoSuch(item, circuit, storing, 'a capacitor or an inductor');
    const due = component?.kind === 'inductor' ? dues.CURRENT : dues.VOLTAGE;
    const scalar = component && readScalar(item.value, due, undefined, item.key);
    if (scalar) state.push([item.key, scalar.value]);
    else ok = false;
  }
  return ok ? Object.fromEntries(state) : undefined;
}
