import MarkdownIt from 'markdown-it';
import { describe, expect, test } from 'vitest';
import { mathsPlugin } from '../../../plugins/render/maths.ts';
import { unbalanced } from './notes.ts';

const markdown = new MarkdownIt().use(mathsPlugin);

describe('maths', () => {
  test('in a line and in a block', () => {
    expect(markdown.render('with $x^2$ in it')).toMatch(/with <math.*<msup>.*<\/math> in it/);
    expect(markdown.render('$$\n\\frac{1}{2}\n$$\n')).toMatch(
      /<div class="maths"[^>]*><math[^>]*display="block".*<mfrac>/,
    );
    expect(markdown.render('so\n$$x$$\n')).toMatch(/display="block"/);
  });

  test.each(['$5 and $6', 'from $5 to $10.', 'a $ alone', 'costs \\$5 or \\$6', '$ x $', '`$x$`'])(
    '%s is no maths',
    (text) => {
      expect(markdown.render(text)).not.toContain('<math');
    },
  );

  test('a formula that cannot be read stands as it was written', () => {
    expect(markdown.render('$\\frac{<b>}$')).toMatch(
      /<code class="maths-error" title="[^"]+">\\frac\{&lt;b&gt;\}<\/code>/,
    );
  });

  test.each([
    '$\\href{javascript:alert(1)}{x}$',
    '$\\class{a" onclick="x}{y}$',
    '$\\includegraphics{http://example.com/x.png}$',
    '$\\text{<img src=x>}$',
  ])('%s brings in no element and no address', (text) => {
    const html = markdown.render(text);
    const withoutTitles = html.replace(/title="[^"]*"/g, '').replace(/<annotation.*?<\/annotation>/g, '');
    expect(withoutTitles).not.toMatch(/href=|src="|<img|onclick="/);
    expect(unbalanced(html)).toBeUndefined();
  });

  test('definitions that expand without end are given up', () => {
    const html = markdown.render('$\\def\\a{\\a\\a}\\a$');
    expect(html).toContain('maths-error');
  });
});
