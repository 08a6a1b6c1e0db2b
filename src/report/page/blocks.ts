import { pageSvg } from '../figures/draw.ts';
import type { Figure } from '../figures/figure.ts';
import { element, escaped } from '../figures/markup.ts';
import { numbersText } from '../figures/numbers.ts';
import type { Statement } from '../wording.ts';

/** Markup in pieces, so that a large page never stands in memory as a whole. */
export type Pieces = Iterable<string>;

export function paragraph(text: string, look?: string): string {
  return element('p', { class: look }, escaped(text));
}

export function list(points: readonly string[]): string {
  return points.length === 0 ? '' : element('ul', {}, points.map((point) => `<li>${escaped(point)}</li>`).join(''));
}

/** Words in front of a statement, so that its tone does not hang on colour. */
const TONES: Readonly<Record<Statement['tone'], string>> = {
  plain: '',
  good: 'Good',
  warning: 'Caution',
  bad: 'Problem',
};

export function statements(all: readonly Statement[]): string {
  const items = all.map(({ text, tone }) => {
    const word = TONES[tone] === '' ? '' : `<b class="tone">${TONES[tone]}</b> `;
    return `<li class="${tone}">${word}<span>${escaped(text)}</span></li>`;
  });
  return `<ul class="statements">${items.join('')}</ul>`;
}

export interface TableColumn {
  readonly name: string;
  readonly isNumber?: boolean;
}

/** A table that scrolls by itself where it is wider than the page. Cells are markup already. */
export function table(caption: string, columns: readonly TableColumn[], rows: readonly (readonly string[])[]): string {
  const look = columns.map(({ isNumber }) => (isNumber ? ' class="number"' : ''));
  const head = columns.map(({ name }, c) => `<th scope="col"${look[c]}>${escaped(name)}</th>`).join('');
  const body = rows
    .map(([first = '', ...rest]) => {
      const cells = rest.map((cell, c) => `<td${look[c + 1]}>${cell}</td>`).join('');
      return `<tr><th scope="row">${first}</th>${cells}</tr>`;
    })
    .join('');
  const inside = `<table><caption>${escaped(caption)}</caption><thead><tr>${head}</tr></thead><tbody>${body}</tbody></table>`;
  return element('div', { class: 'wide', tabindex: 0, role: 'region', 'aria-label': caption }, inside);
}

/** A picture with its title, legend, notes and numbers. */
export function* figureBlock(figure: Figure, data = ''): Pieces {
  const { name, title, description, notes, legend } = figure;
  yield `<figure id="figure-${name}" data-kind="${figure.drawing.kind}">`;
  yield `<figcaption><h3 id="${name}-title">${escaped(title)}</h3>`;
  yield `<p class="unseen" id="${name}-text">${escaped(description)}</p></figcaption>`;
  yield pageSvg(figure);
  yield legend.length === 0 ? '' : legendList(figure);
  yield notes.map((note) => paragraph(note, 'note')).join('');
  yield '<details class="numbers"><summary>Numbers</summary>';
  yield `<pre tabindex="0" role="region" aria-label="${escaped(`Numbers: ${title}`)}">`;
  for (const text of numbersText(figure.numbers)) yield escapedLines(text);
  yield `</pre></details>${data}</figure>`;
}

// Line ends are the rows of the table; everything else goes through the usual door.
function escapedLines(text: string): string {
  return text.split('\n').map(escaped).join('\n');
}

function legendList({ legend }: Figure): string {
  const items = legend.map(({ name, sample, series, value, expanded }) => {
    const svg = element(
      'svg',
      { class: 'sample', width: 28, height: 14, viewBox: '0 0 28 14', 'aria-hidden': 'true' },
      sample,
    );
    const attributes = { 'data-series': series, 'data-value': value, 'data-expanded': expanded };
    return element('li', attributes, `${svg}<span class="name">${escaped(name)}</span>`);
  });
  return element('ul', { class: 'legend' }, items.join(''));
}
