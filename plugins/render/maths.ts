/** TeX maths in the prose, `$...$` and `$$...$$`, to MathML by temml; prices are left alone. */
import type MarkdownIt from 'markdown-it';
import type { StateBlock, StateInline } from 'markdown-it';
import temml from 'temml';
import { escapeHtml } from './html.ts';

export function mathsPlugin(markdown: MarkdownIt): void {
  markdown.inline.ruler.after('escape', 'maths', inlineRule);
  markdown.block.ruler.before('fence', 'maths', blockRule, { alt: ['paragraph', 'blockquote', 'list'] });
  markdown.renderer.rules.maths_inline = (tokens, index) => toMathML(tokens[index]!.content, false);
  markdown.renderer.rules.maths_block = (tokens, index) =>
    `<div class="maths" role="group" aria-label="Formula" tabindex="0">${toMathML(tokens[index]!.content, true)}</div>\n`;
}

function toMathML(tex: string, displayMode: boolean): string {
  try {
    return temml.renderToString(tex, {
      displayMode,
      throwOnError: true,
      trust: false,
      maxExpand: 200,
      maxSize: [20, 200],
    });
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error);
    return `<code class="maths-error" title="${escapeHtml(reason)}">${escapeHtml(tex)}</code>`;
  }
}

/** `$x$`: no blank inside the marks, and no digit after the closing one, so `$5 to $6` is money. */
function inlineRule(state: StateInline, silent: boolean): boolean {
  const { src, pos } = state;
  if (src[pos] !== '$' || src[pos + 1] === '$' || /\s/.test(src[pos + 1] ?? ' ')) return false;
  let end = pos + 1;
  for (;;) {
    end = src.indexOf('$', end);
    if (end < 0) return false;
    if (src[end - 1] !== '\\') break;
    end++;
  }
  if (/\s/.test(src[end - 1]!) || /\d/.test(src[end + 1] ?? '')) return false;
  if (!silent) {
    const token = state.push('maths_inline', 'math', 0);
    token.content = src.slice(pos + 1, end);
  }
  state.pos = end + 1;
  return true;
}

function blockRule(state: StateBlock, startLine: number, endLine: number, silent: boolean): boolean {
  const line = (k: number): string => state.src.slice(state.bMarks[k]! + state.tShift[k]!, state.eMarks[k]!);
  const first = line(startLine);
  if (!first.startsWith('$$')) return false;
  let content = first.slice(2);
  let last = startLine;
  const closed = (text: string): boolean => text.trimEnd().endsWith('$$');
  if (!closed(content)) {
    for (last = startLine + 1; last < endLine; last++) {
      content += `\n${line(last)}`;
      if (closed(line(last))) break;
    }
    if (last >= endLine) return false;
  }
  if (silent) return true;
  const token = state.push('maths_block', 'math', 0);
  token.content = content.trimEnd().slice(0, -2).trim();
  token.map = [startLine, last + 1];
  state.line = last + 1;
  return true;
}
