/** Solving an analysis block: one run for each temperature and each combination of varied values, each at two accuracies. */
import { isOverTime, NoSolution } from '../solver/analysis.ts';
import type { Circuit, Component } from '../solver/circuit.ts';
import { ZERO_CELSIUS } from '../solver/circuit.ts';
import { solve } from '../solver/solve.ts';
import type { AnalysisBlock } from './language/model.ts';
import type { Words } from './problems.ts';
import type { Run } from './results.ts';

/** The solution that figures are checked against is asked for this many times less accuracy. */
const COARSER = 10;

/** No analysis is solved more tightly than this: rounding takes over. */
const TIGHTEST = 1e-11;

export interface AnalysisState {
  readonly block: AnalysisBlock;
  /** Circuit and conditions of each run; the first is the nominal one. */
  readonly cases: readonly { readonly circuit: Circuit; readonly conditions: Run['conditions'] }[];
  runs: Run[];
  /** Accuracy that the runs' solutions were asked for. */
  accuracy: number;
}

export function startAnalysis(block: AnalysisBlock, circuit: Circuit): AnalysisState | { failure: Words } {
  const cases = listCases(block, circuit);
  const accuracy = block.accuracy;
  const runs: Run[] = [];
  for (const { circuit: varied, conditions } of cases) {
    try {
      runs.push({ conditions, ...solveTwice(varied, block, accuracy) });
    } catch (error) {
      return { failure: failureWords(block, conditions, error) };
    }
  }
  return { block, cases, runs, accuracy };
}

function solveTwice(circuit: Circuit, block: AnalysisBlock, accuracy: number): Pick<Run, 'solution' | 'coarse'> {
  const solution = solve(circuit, block.request, accuracy);
  // an operating point and a characteristic are solved to rounding: a coarser one would be the same
  if (!isOverTime(block.request)) return { solution, coarse: solution };
  try {
    return { solution, coarse: solve(circuit, block.request, accuracy * COARSER) };
  } catch (error) {
    if (!(error instanceof NoSolution)) throw error;
    return { solution: solve(circuit, block.request, accuracy / COARSER), coarse: solution };
  }
}

/** Solves once more, ten times more tightly; false where that cannot be done. */
export function refineAnalysis(state: AnalysisState): boolean {
  const accuracy = state.accuracy / COARSER;
  if (accuracy < TIGHTEST) return false;
  try {
    state.runs = state.runs.map(({ conditions, solution }, k) => ({
      conditions,
      solution: solve(state.cases[k]!.circuit, state.block.request, accuracy),
      coarse: solution,
    }));
  } catch (error) {
    // what was found at less accuracy stands, with its larger uncertainty
    if (error instanceof NoSolution) return false;
    throw error;
  }
  state.accuracy = accuracy;
  return true;
}

function listCases(block: AnalysisBlock, circuit: Circuit): AnalysisState['cases'] {
  let cases: { circuit: Circuit; conditions: Run['conditions'] }[] = [{ circuit, conditions: [] }];
  if (block.temperatures.length > 0) {
    cases = block.temperatures.map((temperature) => ({
      circuit: { ...circuit, temperature },
      conditions:
        block.temperatures.length > 1
          ? [{ name: 'T', text: `${Number((temperature - ZERO_CELSIUS).toFixed(6))} °C`, value: temperature }]
          : [],
    }));
  }
  for (const { designator, values } of block.vary) {
    cases = cases.flatMap((base) =>
      values.map(({ value, text }) => ({
        circuit: withValue(base.circuit, designator, value),
        conditions: [...base.conditions, { name: designator, text, value }],
      })),
    );
  }
  return cases;
}

/** The circuit with a component's main value replaced; the language stage has checked that it has one. */
function withValue(circuit: Circuit, designator: string, value: number): Circuit {
  const replace = (component: Component): Component => {
    if (component.designator !== designator) return component;
    switch (component.kind) {
      case 'resistor':
        return { ...component, resistance: value };
      case 'capacitor':
        return { ...component, capacitance: value };
      case 'inductor':
        return { ...component, inductance: value };
      case 'source':
      case 'current-source':
        return { ...component, wave: { shape: 'constant', value } };
      case 'controlled-source':
        return { ...component, gain: value };
      default:
        return component;
    }
  };
  return { ...circuit, components: circuit.components.map(replace) };
}

function failureWords(block: AnalysisBlock, conditions: Run['conditions'], error: unknown): Words {
  const where = conditions.length > 0 ? ` (${conditions.map(({ name, text }) => `${name} = ${text}`).join(', ')})` : '';
  if (!(error instanceof NoSolution)) {
    const reason = error instanceof Error ? error.message : String(error);
    return { message: `Internal error: analysis '${block.name}'${where}: ${reason.replace(/^Internal error: /, '')}` };
  }
  const { details } = error;
  const at =
    details.at === undefined || block.request.find === 'operating point'
      ? ''
      : block.request.find === 'characteristic'
        ? ` at ${block.request.sweep} = ${Number(details.at.toPrecision(6))}`
        : ` at t = ${Number(details.at.toPrecision(9))} s`;
  const component = details.component && !details.reason.includes(details.component) ? ` (${details.component})` : '';
  return {
    message: `analysis '${block.name}' (${details.analysis})${where} has no solution${at}: ${details.reason}${component}`,
    expected: details.advice,
  };
}
