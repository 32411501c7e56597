/** A name that should be a component of a circuit and is not. */
import type { Circuit, Component } from '../../solver/circuit.ts';
import { expectedName } from './nearest.ts';
import { report } from './passage.ts';
import type { YamlEntry } from './yaml-tree.ts';

/** Reports a key that names no component, or one of the wrong kind; `what` is due, and `fitting` are those that it could be. */
export function reportNoSuch(entry: YamlEntry, circuit: Circuit, fitting: readonly Component[], what: string): void {
  const names = fitting.map((component) => component.designator);
  const other = circuit.components.find((component) => component.designator === entry.key);
  report(entry.keyNode.passage, entry.keyNode.place, {
    message: other
      ? `\`${entry.key}\` is a ${other.kind}, and ${what} is due here`
      : `the circuit \`${circuit.name}\` has no component \`${entry.key}\``,
    expected: names.length === 0 ? `${what}, and the circuit has none` : expectedName(entry.key, names),
  });
}
