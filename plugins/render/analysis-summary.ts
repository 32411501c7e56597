/** What an analysis block asked for and how it was solved. */
import { ZERO_CELSIUS } from '../../solver/circuit.ts';
import { CURRENT, TIME, VOLTAGE } from '../language/dimensions.ts';
import { fittingUnit, formatQuantity } from '../language/format.ts';
import type { SolvedAnalysis } from '../results.ts';
import { escapeHtml } from './html.ts';
import { typographic } from './number-text.ts';

export function renderAnalysis({ block, runs }: SolvedAnalysis): string {
  const sentence = `${describe({ block, runs })}.`;
  const steps = runs.reduce((sum, { solution }) => sum + solution.effort.steps, 0);
  const newton = runs.reduce((sum, { solution }) => sum + solution.effort.newtonIterations, 0);
  const events = runs.reduce((sum, { solution }) => sum + solution.effort.events, 0);
  const remarks = [...new Set(runs.flatMap(({ solution }) => solution.remarks))];
  const rows: [string, string][] = [
    ['Accuracy asked', exponent(block.accuracy)],
    ['Steps', String(steps)],
    ['Newton iterations', String(newton)],
    ...(events > 0 ? ([['Events', String(events)]] as [string, string][]) : []),
    ['Largest node sum (Kirchhoff)', exponent(worst(runs, 'kirchhoff'))],
    ['Power balance (Tellegen)', exponent(worst(runs, 'tellegen'))],
  ];
  const list = rows.map(([name, value]) => `<dt>${name}</dt><dd>${value}</dd>`).join('');
  const notes =
    remarks.length > 0
      ? `<ul class="remarks">${remarks.map((remark) => `<li>${escapeHtml(remark)}</li>`).join('')}</ul>`
      : '';
  return (
    `<div class="analysis"><p><strong>${escapeHtml(block.name)}</strong>: ${escapeHtml(sentence)}</p>${notes}` +
    `<details><summary>How it was solved</summary><dl>${list}</dl></details></div>`
  );
}

/** The swept range in the source's unit. */
function sweptRange(
  request: { readonly sweep: string; readonly from: number; readonly to: number },
  run: SolvedAnalysis['runs'][number],
): string {
  const source = run.solution.circuit.components.find(({ designator }) => designator === request.sweep);
  const unit = fittingUnit(
    source?.kind === 'current-source' ? CURRENT : VOLTAGE,
    Math.max(Math.abs(request.from), Math.abs(request.to)),
  );
  const text = (value: number): string => typographic(String(Number((value / unit.factor).toPrecision(6))));
  return `${text(request.from)} to ${text(request.to)}\u00a0${unit.text}`;
}

function describe({ block, runs }: SolvedAnalysis): string {
  const { request } = block;
  const parts = [`${request.find} of ${block.circuit}`];
  const seconds = (value: number): string =>
    formatQuantity(value, TIME, 6)
      .replace(/(\.\d*?)0+(?= )/, '$1')
      .replace(/\.(?= )/, '');
  if (request.find === 'time response') {
    parts.push(`${seconds(request.from)} to ${seconds(request.until)}`);
    parts.push(
      request.start === 'operating point'
        ? 'from the operating point'
        : request.start === 'rest'
          ? 'from rest'
          : `from ${Object.keys(request.start).join(', ')} as stated`,
    );
  }
  if (request.find === 'characteristic') parts.push(`${request.sweep} swept from ${sweptRange(request, runs[0]!)}`);
  if (block.temperatures.length > 0) {
    parts.push(
      `at ${typographic(block.temperatures.map((kelvin) => Number((kelvin - ZERO_CELSIUS).toFixed(6))).join(', '))}\u00a0°C`,
    );
  }
  for (const { designator, values } of block.vary)
    parts.push(`${designator} = ${values.map(({ text }) => text).join(', ')}`);
  if (runs.length > 1) parts.push(`${runs.length} runs`);
  return parts.join(', ');
}

function worst(runs: SolvedAnalysis['runs'], figure: 'kirchhoff' | 'tellegen'): number {
  return Math.max(...runs.map(({ solution }) => solution.audit[figure]));
}

export function exponent(value: number): string {
  if (value === 0) return '0';
  const [mantissa, power] = value.toExponential(0).split('e');
  const raised = `10<sup>${Number(power)}</sup>`.replace('-', '−');
  return mantissa === '1' ? raised : `${mantissa} · ${raised}`;
}
