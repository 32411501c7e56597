/** What can be asked of a circuit, and what comes back: plain data, SI units. */
import type { Circuit } from './circuit.ts';

/** Relative accuracy that every figure must meet where the author does not say. */
export const DEFAULT_ACCURACY = 1e-4;

export interface OperatingPointRequest {
  readonly find: 'operating point';
}

/** The operating points over a range of one source's value (volt or ampere). */
export interface CharacteristicRequest {
  readonly find: 'characteristic';
  /** Designator of the swept source. */
  readonly sweep: string;
  readonly from: number;
  readonly to: number;
  /** At least 2; where the curve bends, more are solved for. */
  readonly points: number;
}

export interface TimeResponseRequest {
  readonly find: 'time response';
  /** Seconds. */
  readonly until: number;
  /** Seconds; what comes before is solved and not kept. */
  readonly from: number;
  readonly start: StartingState;
}

/**
 * Where a time response begins: at the operating point of the sources' first values; at rest (every capacitor at 0 V,
 * every inductor at 0 A); or with stated capacitor voltages (volt) and inductor currents (ampere), the rest at zero.
 */
export type StartingState = 'operating point' | 'rest' | { readonly [designator: string]: number };

/** One period of the response that repeats itself for ever. */
export interface SteadyStateRequest {
  readonly find: 'steady state';
  /** Seconds; default the sources' common period. */
  readonly period?: number;
}

export type AnalysisRequest = OperatingPointRequest | CharacteristicRequest | TimeResponseRequest | SteadyStateRequest;

/** True where the axis of the solution is time. */
export function isOverTime(request: AnalysisRequest): boolean {
  return request.find === 'time response' || request.find === 'steady state';
}

/** Effort spent, for the colophon and the benchmarks. */
export interface Effort {
  steps: number;
  rejectedSteps: number;
  newtonIterations: number;
  factorisations: number;
  events: number;
}

/** How well the solution satisfies the laws that any solution must. */
export interface Audit {
  /** Largest sum of the currents into a node, relative to the largest current there. */
  readonly kirchhoff: number;
  /** Largest sum of all components' powers, relative to the sum of their magnitudes (Tellegen's theorem). */
  readonly tellegen: number;
}

/**
 * A solved analysis. `grid` holds the ends of the steps (seconds, or the swept value; a single 0 for an operating
 * point). `unknowns` holds, for step k and node s of `COLLOCATION_NODES`, the vector of unknowns at [(4 k + s) n, ...).
 * An operating point has one step of no length.
 */
export interface Solution {
  readonly circuit: Circuit;
  readonly request: AnalysisRequest;
  readonly grid: Float64Array;
  readonly unknowns: Float64Array;
  /** Names of the n unknowns, for messages: a node, or a component's current. */
  readonly unknownNames: readonly string[];
  /** Mode of every threshold device and switch (column) in every step (row), as numbered by its device. */
  readonly modes: Int8Array;
  /** Conductance across every exponential junction (siemens) that the solution was found with; usually 0. */
  readonly junctionLeak: number;
  readonly effort: Effort;
  readonly audit: Audit;
  /** What the reader should know: fallbacks used, assumptions taken. */
  readonly remarks: readonly string[];
}

export interface NoSolutionDetails {
  readonly analysis: string;
  /** Seconds (time response) or swept value (characteristic). */
  readonly at?: number;
  /** The node or branch whose equation stayed furthest from satisfied. */
  readonly unknown?: string;
  /** The component that would not settle. */
  readonly component?: string;
  readonly reason: string;
  /** What the author may try. */
  readonly advice: string;
}

/** Thrown by an analysis that finds no solution. */
export class NoSolution extends Error {
  readonly details: NoSolutionDetails;
  constructor(details: NoSolutionDetails) {
    super(details.reason);
    this.name = 'NoSolution';
    this.details = details;
  }
}
