import { createHash } from 'node:crypto';
import { escaped } from '../figures/markup.ts';
import { CAUTIONS } from '../wording.ts';
import type { Pieces } from './blocks.ts';
import { pageStyle } from './page-style.ts';
import type { Section } from './sections.ts';

/** What a page is made of besides its look. */
export interface PageParts {
  readonly version: string;
  readonly title: string;
  /** One line below the title. */
  readonly about: string;
  readonly sections: readonly Section[];
  /** Text of the page's program; empty where it has none. */
  readonly script: string;
}

/** A page that opens from disk and fetches nothing; a content security policy holds it to that. */
export function* pageShell({ version, title, about, sections, script }: PageParts): Pieces {
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
  yield '<!doctype html>\n<html lang="en"><head><meta charset="utf-8">';
  yield `<meta http-equiv="Content-Security-Policy" content="${escaped(policy)}">`;
  yield '<meta name="viewport" content="width=device-width, initial-scale=1">';
  yield `<meta name="generator" content="${escaped(`oddloop ${version}`)}">`;
  yield `<title>${escaped(title)}</title><style>${style}</style></head><body>`;
  yield `<header><h1>${escaped(title)}</h1>`;
  yield `<p class="faint">${escaped(about)}</p></header>`;
  yield '<nav aria-label="Sections"><ul>';
  yield sections.map((section) => `<li><a href="#${section.id}">${escaped(section.title)}</a></li>`).join('');
  yield '</ul></nav><main>';
  for (const { id, title: heading, question, body } of sections) {
    yield `\n<section id="${id}" aria-labelledby="${id}-heading"><h2 id="${id}-heading">${escaped(heading)}</h2>`;
    yield `<p class="question">${escaped(question)}</p>`;
    yield* body();
    yield '</section>';
  }
  yield `</main><footer class="cautions faint">${CAUTIONS.map((text) => `<p>${escaped(text)}</p>`).join('')}</footer>`;
  if (program !== '') yield `<script>${program}</script>`;
  yield '</body></html>\n';
}

function hashSource(text: string): string {
  return `'sha256-${createHash('sha256').update(text).digest('base64')}'`;
}
