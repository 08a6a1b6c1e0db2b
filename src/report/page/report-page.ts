import { createHash } from 'node:crypto';
import { benchCounts } from '../bench-counts.ts';
import type { Figures } from '../figures/figures.ts';
import { escaped } from '../figures/markup.ts';
import type { Result } from '../result.ts';
import { CAUTIONS, readSentence } from '../wording.ts';
import type { Pieces } from './blocks.ts';
import { pageStyle } from './page-style.ts';
import { sections } from './sections.ts';

/**
 * `report.html`: one file that opens from disk and fetches nothing; a content security policy holds it to that.
 * @param script text of the page's program; without it (empty) the pictures stand still and everything else is the same.
 */
export function* reportPage(result: Result, figures: Figures, script: string): Pieces {
  const style = pageStyle();
  // An end tag inside a text of the program would end the element.
  const program = script.replaceAll('</script', '<\\/script');
  const policy = [
    "default-src 'none'",
    `style-src ${hashSource(style)}`,
    ...(program === '' ? [] : [`script-src ${hashSource(program)}`]),
    "base-uri 'none'",
    "form-action 'none'",
  ].join('; ');
  const all = sections(result, figures);
  yield '<!doctype html>\n<html lang="en"><head><meta charset="utf-8">';
  yield `<meta http-equiv="Content-Security-Policy" content="${escaped(policy)}">`;
  yield '<meta name="viewport" content="width=device-width, initial-scale=1">';
  yield `<meta name="generator" content="${escaped(`oddloop ${result.version}`)}">`;
  yield `<title>${escaped(titleOf(result))}</title><style>${style}</style></head><body>`;
  yield `<header><h1>${escaped(titleOf(result))}</h1>`;
  yield `<p class="faint">${escaped(readSentence(result.input, benchCounts(result.set, result.model)))}</p></header>`;
  yield '<nav aria-label="Sections"><ul>';
  yield all.map(({ id, title }) => `<li><a href="#${id}">${escaped(title)}</a></li>`).join('');
  yield '</ul></nav><main>';
  for (const { id, title, question, body } of all) {
    yield `\n<section id="${id}" aria-labelledby="${id}-heading"><h2 id="${id}-heading">${escaped(title)}</h2>`;
    yield `<p class="question">${escaped(question)}</p>`;
    yield* body();
    yield '</section>';
  }
  yield `</main><footer class="cautions faint">${CAUTIONS.map((text) => `<p>${escaped(text)}</p>`).join('')}</footer>`;
  if (program !== '') yield `<script>${program}</script>`;
  yield '</body></html>\n';
}

function titleOf({ input }: Result): string {
  const names = input.files.map(({ name }) => name.split(/[\\/]/).at(-1)!);
  return `Responses from ${names.length > 2 ? `${names[0]} and ${names.length - 1} more files` : names.join(' and ')}`;
}

function hashSource(text: string): string {
  return `'sha256-${createHash('sha256').update(text).digest('base64')}'`;
}
