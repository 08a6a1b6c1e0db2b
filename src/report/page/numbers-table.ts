/// <reference lib="dom" />
import { button, make } from './dom.ts';
import { readNumbers } from './numbers-reader.ts';

/** Numbers of the figures: what the cursors read, whatever has become of the text in the page. */
const texts = new WeakMap<Element, string>();

export function numbersOf(figure: Element): string | undefined {
  return texts.get(figure);
}

/** Turns the numbers of a figure into a table when they are opened, with a button that copies them. */
export function addNumbersTable(figure: HTMLElement): void {
  const details = figure.querySelector<HTMLDetailsElement>('details.numbers');
  const text = details?.querySelector('pre');
  if (details === null || text === null || text === undefined) return;
  const raw = text.textContent ?? '';
  texts.set(figure, raw);
  const label = text.getAttribute('aria-label') ?? 'Numbers';
  details.addEventListener('toggle', () => {
    if (!details.open || details.querySelector('table') !== null) return;
    const { columns, rows } = readNumbers(raw);
    const head = make('tr', {}, ...columns.map((name) => make('th', { scope: 'col' }, name)));
    const body = rows.map(([first = '', ...rest]) =>
      make('tr', {}, make('th', { scope: 'row' }, first), ...rest.map((cell) => make('td', {}, cell))),
    );
    const table = make('table', {}, make('thead', {}, head), make('tbody', {}, ...body));
    const copy = button('Copy', () => {
      const done = () => {
        copy.textContent = 'Copied';
        setTimeout(() => {
          copy.textContent = 'Copy';
        }, 1500);
      };
      // Cells with tabs between them: what spreadsheets take.
      copyText([columns, ...rows].map((row) => row.join('\t')).join('\n'), table).then(done);
    });
    text.replaceWith(copy, make('div', { class: 'scroll', tabindex: '0', role: 'region', 'aria-label': label }, table));
  });
}

/** Where a page opened from disk may not write to the clipboard, the table is selected, so that a key does it. */
async function copyText(text: string, table: HTMLElement): Promise<void> {
  try {
    await navigator.clipboard.writeText(text);
  } catch {
    getSelection()?.selectAllChildren(table);
    document.execCommand('copy');
  }
}
