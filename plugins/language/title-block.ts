/** The front matter of a note: its title block, and whatever keys the site around it uses. */
import type { Words } from '../problems.ts';
import type { NoteStatus, TitleBlock } from './model.ts';
import { list, nearest } from './nearest.ts';
import { report } from './passage.ts';
import type { YamlNode } from './yaml-tree.ts';

export const STATUSES: readonly NoteStatus[] = ['draft', 'in review', 'released'];

/** Keys of the title block and what each says. */
export const TITLE_BLOCK_KEYS: { readonly [key: string]: string } = {
  title: 'the title; default: the first heading',
  number: 'the document number',
  revision: 'the revision, e.g. `B`',
  status: 'draft, in review or released; default: draft',
  author: 'who wrote it',
  date: 'the date of the revision, e.g. `2026-03-14`',
  reviewers: 'who reviews it, a list',
};

/** Keys that a static site commonly reads: never taken for a misspelt key of the title block. */
const SITE_KEYS = [
  'tags',
  'layout',
  'permalink',
  'description',
  'summary',
  'keywords',
  'lang',
  'draft',
  'data',
  'order',
];

/** Reads the front matter; `fallbackTitle` serves where it has no title. */
export function readTitleBlock(tree: YamlNode | undefined, fallbackTitle: string): TitleBlock {
  const texts = new Map<string, string>();
  let status: NoteStatus = 'draft';
  let reviewers: readonly string[] = [];

  if (tree && tree.type !== 'mapping') report(tree.passage, tree.place, NOT_KEYS);
  for (const { key, keyNode, value } of tree?.type === 'mapping' ? tree.entries : []) {
    const problem = (words: Words, node: YamlNode = value) => report(node.passage, node.place, words);
    if (!Object.hasOwn(TITLE_BLOCK_KEYS, key)) {
      const meant = SITE_KEYS.includes(key) ? undefined : nearest(key, Object.keys(TITLE_BLOCK_KEYS));
      if (meant)
        problem(
          {
            message: `\`${key}\` is no key of the title block`,
            expected: `\`${meant}\` is the nearest`,
            severity: 'warning',
          },
          keyNode,
        );
    } else if (key === 'reviewers') {
      const items =
        value.type === 'sequence' ? value.items : value.type === 'scalar' && value.text !== '' ? [value] : [];
      reviewers = items.flatMap((item) => (item.type === 'scalar' ? [item.text.trim()] : []));
      if (value.type === 'mapping' || reviewers.length < items.length)
        problem({
          message: '`reviewers` is not a list of names',
          expected: 'names',
          example: 'reviewers: [A. Moor, B. Fell]',
        });
    } else if (value.type !== 'scalar') {
      problem({ message: `\`${key}\` holds a ${value.type === 'mapping' ? 'mapping' : 'list'}`, expected: 'a text' });
    } else if (key === 'status') {
      const found = STATUSES.find((known) => known === value.text.trim());
      if (found) status = found;
      else problem({ message: `\`${value.text}\` is not a status`, expected: `one of ${list(STATUSES, 'or')}` });
    } else if (key === 'date' && value.text !== '' && !isDate(value.text.trim())) {
      problem({
        message: `\`${value.text}\` is not a date`,
        expected: 'year, month and day',
        example: 'date: 2026-03-14',
      });
    } else if (value.text.trim() !== '') {
      texts.set(key, value.text.trim());
    }
  }
  const optional = (key: 'number' | 'revision' | 'author' | 'date') =>
    texts.has(key) ? { [key]: texts.get(key)! } : {};
  return {
    title: texts.get('title') ?? fallbackTitle,
    ...optional('number'),
    ...optional('revision'),
    status,
    ...optional('author'),
    ...optional('date'),
    reviewers,
  };
}

const NOT_KEYS: Words = {
  message: 'the front matter is not a list of keys and values',
  expected: '`key: value` lines',
  example: 'title: Line-alive lamp',
};

function isDate(text: string): boolean {
  return /^\d{4}-\d{2}-\d{2}(?:[T ].*)?$/.test(text) && !Number.isNaN(Date.parse(text.slice(0, 10)));
}
