/** A plot's curves: each line of the block evaluated for every run. */
import type { AnalysisRequest } from '../../solver/analysis.ts';
import type { Waveform } from '../../solver/waveform/waveform.ts';
import { CURRENT, type Dimension, equal, nameOf, TIME, VOLTAGE } from '../language/dimensions.ts';
import type { Note, PlotBlock, PlotLine } from '../language/model.ts';
import type { Curve, SolvedPlot } from '../results.ts';
import type { AnalysisState } from '../solve-analysis.ts';
import { fromUnitText } from './display-unit.ts';
import type { NoteScope } from './scope.ts';

export interface PlotOutcome {
  readonly solved?: SolvedPlot;
  readonly failures: readonly string[];
}

interface RawCurve {
  readonly line: PlotLine;
  readonly side: 'left' | 'right';
  readonly run: number;
  readonly waveform: Waveform;
}

export function measurePlot(
  block: PlotBlock,
  note: Note,
  states: ReadonlyMap<string, AnalysisState>,
  scope: NoteScope,
): PlotOutcome {
  const state = states.get(block.from);
  if (!state) return { failures: [] };
  const failures: string[] = [];
  const raw: RawCurve[] = [];
  for (const [side, lines] of [
    ['left', block.lines],
    ['right', block.right],
  ] as const) {
    for (const line of lines) {
      for (let run = 0; run < state.runs.length; run++) {
        const waveform = evaluateWaveform(line.expression, run, scope, state, failures);
        if (waveform) raw.push({ line, side, run, waveform });
      }
    }
  }
  const units = new Map<string, { text: string; scale: number }>();
  for (const side of ['left', 'right'] as const) {
    const curves = raw.filter((curve) => curve.side === side);
    const first = curves[0];
    if (!first) continue;
    const { dimension } = first.line.expression;
    const other = curves.find(({ line }) => !equal(line.expression.dimension, dimension));
    if (other) {
      failures.push(
        `plot '${block.title ?? block.name}': \`${first.line.expression.text}\` (${nameOf(dimension)}) and ` +
          `\`${other.line.expression.text}\` (${nameOf(other.line.expression.dimension)}) cannot share an axis: put one under \`right:\``,
      );
    }
    const stated = curves.find(({ line }) => line.unit !== undefined)?.line.unit;
    const unit = fromUnitText(stated, dimension, Math.max(...curves.map(({ waveform }) => largest(waveform))));
    units.set(side, { text: unit.text, scale: 1 / unit.factor });
  }
  const against = block.against;
  const curves: Curve[] = raw.map(({ line, side, run, waveform }) => {
    const unit = units.get(side)!;
    const horizontal = against ? evaluateWaveform(against, run, scope, state, failures) : undefined;
    return {
      label: line.label ?? line.expression.text,
      unit: unit.text,
      scale: unit.scale,
      side,
      conditions: state.runs[run]!.conditions,
      waveform,
      ...(horizontal ? { against: horizontal } : {}),
    };
  });
  const spans = block.marks.flatMap(({ when, label }) => {
    const outcome = scope.evaluate(when, 0, 'fine');
    if (outcome === 'pending') return [];
    if (!outcome.ok) {
      failures.push(`mark '${label}': ${outcome.reason}`);
      return [];
    }
    const { value } = outcome;
    if (typeof value !== 'object' || !('starts' in value)) return [];
    return Array.from(value.starts, (from, k) => ({ label, from, to: value.ends[k]! }));
  });
  if (curves.length === 0) return { failures };
  return { solved: { block, horizontal: horizontalAxis(block, note, state, curves), curves, spans }, failures };
}

/** Largest magnitude of what is drawn; gaps do not count. */
function largest({ values }: Waveform): number {
  let magnitude = 0;
  for (const value of values) if (Math.abs(value) > magnitude) magnitude = Math.abs(value);
  return magnitude;
}

function evaluateWaveform(
  expression: PlotLine['expression'],
  run: number,
  scope: NoteScope,
  state: AnalysisState,
  failures: string[],
): Waveform | undefined {
  const outcome = scope.evaluate(expression, run, 'fine');
  if (outcome === 'pending') return undefined;
  if (!outcome.ok) {
    failures.push(`\`${expression.text}\` cannot be drawn: ${outcome.reason}`);
    return undefined;
  }
  const { value } = outcome;
  if (typeof value === 'number') {
    // a level: a straight line over the whole axis
    const { grid } = state.runs[run]!.solution;
    const ends = Float64Array.of(grid[0]!, grid.at(-1)!);
    return { grid: ends, values: new Float64Array(4).fill(value) };
  }
  return typeof value === 'object' && 'values' in value ? value : undefined;
}

function horizontalAxis(
  block: PlotBlock,
  note: Note,
  state: AnalysisState,
  curves: readonly Curve[],
): SolvedPlot['horizontal'] {
  if (block.against) {
    const { dimension, text } = block.against;
    const extent = Math.max(...curves.map(({ against }) => (against ? largest(against) : 0)));
    const unit = fromUnitText(undefined, dimension, extent);
    return { label: text, unit: unit.text, scale: 1 / unit.factor };
  }
  const { request } = state.block;
  const { grid } = state.runs[0]!.solution;
  const extent = Math.max(Math.abs(grid[0]!), Math.abs(grid.at(-1)!));
  const { label, dimension } = axisOf(request, note, state);
  const unit = fromUnitText(undefined, dimension, extent);
  return { label, unit: unit.text, scale: 1 / unit.factor };
}

function axisOf(request: AnalysisRequest, note: Note, state: AnalysisState): { label: string; dimension: Dimension } {
  if (request.find !== 'characteristic') return { label: 'time', dimension: TIME };
  const circuit = note.blocks.find((block) => block.kind === 'circuit' && block.name === state.block.circuit);
  const components = circuit?.kind === 'circuit' ? circuit.circuit.components : [];
  const swept = components.find(({ designator }) => designator === request.sweep);
  return { label: request.sweep, dimension: swept?.kind === 'current-source' ? CURRENT : VOLTAGE };
}
