/** The pages' data, as the layouts take it: everything already put into words or HTML. */
import { SOLVER_VERSION } from '../solver/solve.ts';
import type { NoteStatus, TitleBlock } from './language/model.ts';
import { type Problem, sortProblems } from './problems.ts';
import { exponent } from './render/analysis-summary.ts';
import { verdictHtml } from './render/figure-table.ts';
import { type NotePage, renderNotePage } from './render/note-page.ts';
import type { SolvedNote } from './results.ts';
import type { SiteModel } from './site-model.ts';

export interface NoteEntry {
  readonly solved: SolvedNote;
  readonly id: string;
  readonly url: string;
  readonly titleBlock: TitleBlock;
  readonly statusClass: string;
  readonly figures: number;
  readonly broken: number;
  readonly brokenHtml: string;
  readonly errors: number;
  /** Those found by drawing included. */
  readonly problems: readonly Problem[];
  readonly page: NotePage;
  /** Lines of the colophon, HTML. */
  readonly colophon: readonly string[];
}

const STATUS_CLASS: { readonly [status in NoteStatus]: string } = {
  draft: 'draft',
  'in review': 'review',
  released: 'released',
};

/** Renders every note; ordered by number, notes without one last. */
export async function renderSite(model: SiteModel): Promise<NoteEntry[]> {
  const entries: NoteEntry[] = [];
  for (const solved of model.notes) entries.push(await renderEntry(solved));
  const key = ({ titleBlock, id }: NoteEntry): string => `${titleBlock.number ?? '\uffff'} ${id}`;
  return entries.sort((a, b) => key(a).localeCompare(key(b), 'en', { numeric: true }));
}

async function renderEntry(solved: SolvedNote): Promise<NoteEntry> {
  const { note } = solved;
  const page = await renderNotePage(solved);
  const problems = sortProblems([...solved.problems, ...page.problems], note.file);
  const results = solved.figureTables.flatMap((table) => table.results);
  const broken = results.filter(({ verdict }) => verdict === 'broken' || verdict === 'too close to call').length;
  return {
    solved,
    id: note.id,
    url: `notes/${encodeURIComponent(note.id)}.html`,
    titleBlock: note.titleBlock,
    statusClass: STATUS_CLASS[note.titleBlock.status],
    figures: results.length,
    broken,
    brokenHtml: broken > 0 ? `${verdictHtml('broken')} ${broken}` : '0',
    errors: problems.filter(({ severity }) => severity === 'error').length,
    problems,
    page,
    colophon: colophonOf(solved),
  };
}

function colophonOf({ analyses }: SolvedNote): string[] {
  const runs = analyses.flatMap((analysis) => analysis.runs);
  if (runs.length === 0) return [`Solver version ${SOLVER_VERSION}.`];
  const accuracies = [...new Set(analyses.map(({ block }) => block.accuracy))].sort((a, b) => a - b);
  const kirchhoff = Math.max(...runs.map(({ solution }) => solution.audit.kirchhoff));
  const tellegen = Math.max(...runs.map(({ solution }) => solution.audit.tellegen));
  return [
    `Solver version ${SOLVER_VERSION}; ${analyses.length} ${analyses.length === 1 ? 'analysis' : 'analyses'} in ${runs.length} ${runs.length === 1 ? 'run' : 'runs'}, accuracy asked ${accuracies.map(exponent).join(', ')}.`,
    `Audit: currents into a node sum to zero within ${exponent(kirchhoff)} of the largest, powers within ${exponent(tellegen)}.`,
  ];
}
