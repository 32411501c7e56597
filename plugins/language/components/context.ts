/** What the reader of one kind of component is given, and what it gives back. */
import type { Component } from '../../../solver/circuit.ts';
import type { Dimension } from '../dimensions.ts';
import type { PartFile } from '../parts.ts';
import type { Tolerance } from '../scalar.ts';
import type { YamlEntry, YamlMapping, YamlNode } from '../yaml-tree.ts';

/** A value that expressions can read: `C1.value`, `D1.rating.forward_current`. */
export interface Datum {
  /** SI. */
  readonly value: number;
  readonly dimension: Dimension;
  /** As written. */
  readonly text: string;
}

/** The files around a note, as far as its circuits read them. */
export interface Surroundings {
  /** A part by its name, reported at `node` where it cannot be had. */
  readonly part: (node: YamlNode, name: string) => PartFile | undefined;
  /** A file named by the author, as text; reported at `node` where it cannot be had. */
  readonly text: (node: YamlNode, path: string) => string | undefined;
}

export interface ComponentInput {
  readonly designator: string;
  readonly kind: string;
  /** The entry `KIND: VALUE`. */
  readonly entry: YamlEntry;
  /** The component's whole mapping. */
  readonly mapping: YamlMapping;
  readonly nodes: readonly [string, string];
  readonly surroundings: Surroundings;
}

export interface ComponentOutput {
  readonly component: Component;
  /** For the component table. */
  readonly value: string;
  readonly tolerance?: Tolerance;
  readonly part?: string;
  /** By path: `value`, `rating.forward_current`. */
  readonly data?: ReadonlyMap<string, Datum>;
}
