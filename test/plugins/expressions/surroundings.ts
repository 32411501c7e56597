/** A note's surroundings for the tests of checker and evaluator: a lamp circuit and four analyses. */
import type { CheckContext } from '../../../plugins/expressions/context.ts';
import { CAPACITANCE, CURRENT, FLUX, POWER, RESISTANCE } from '../../../plugins/language/dimensions.ts';

const green = new Map([
  ['rating.forward_current', { value: 20e-3, dimension: CURRENT }],
  ['rating.dissipation', { value: 0.1, dimension: POWER }],
]);

export const context: CheckContext = {
  analyses: [
    { name: 'bias', find: 'operating point', circuit: 'lamp' },
    { name: 'curve', find: 'characteristic', circuit: 'lamp', sweep: 'G1' },
    { name: 'slow-ramp', find: 'time response', circuit: 'lamp' },
    { name: 'coil', find: 'time response', circuit: 'relay' },
  ],
  from: 'slow-ramp',
  circuits: [
    {
      name: 'lamp',
      components: [
        { designator: 'G1', kind: 'source', nodes: ['line', 'gnd'] },
        {
          designator: 'R1',
          kind: 'resistor',
          nodes: ['line', 'a'],
          data: new Map([['value', { value: 47, dimension: RESISTANCE }]]),
        },
        {
          designator: 'C1',
          kind: 'capacitor',
          nodes: ['a', 'lamp'],
          data: new Map([['value', { value: 1e-6, dimension: CAPACITANCE }]]),
        },
        { designator: 'D1', kind: 'led', nodes: ['lamp', 'gnd'], data: green },
        { designator: 'D2', kind: 'led', nodes: ['gnd', 'lamp'], data: green },
      ],
    },
    {
      name: 'relay',
      components: [
        { designator: 'G9', kind: 'current-source', nodes: ['feed', 'gnd'] },
        { designator: 'L1', kind: 'inductor', nodes: ['feed', 'gnd'] },
      ],
    },
  ],
  figures: new Map([
    ['lamp_mean', { kind: 'number', dimension: CURRENT }],
    ['a', { kind: 'number', dimension: FLUX }],
  ]),
  foreignFigure: (note, figure) =>
    note !== 'other-note'
      ? 'unknown note'
      : figure === 'peak'
        ? { kind: 'number', dimension: CURRENT }
        : 'unknown figure',
  notes: ['other-note'],
};
