/// <reference lib="dom" />
import { frequencyText } from '../../quantity/frequency.ts';
import { make, makeSvg } from './dom.ts';
import { readNumbers } from './numbers-reader.ts';
import { numbersOf } from './numbers-table.ts';
import { frequencyAt, partOf, type Zoomed } from './zoom.ts';

/** What the page holds of the map beside its numbers; an empty entry is the same as its left neighbour. */
export interface CellsData {
  readonly u: readonly string[];
  readonly take?: readonly string[];
  readonly frequency?: readonly string[];
}

/** A cursor over takes and frequency that tells take, frequency, residual and u of a cell. */
export function addMapCursor(figure: HTMLElement, data: CellsData, zoomed: Zoomed): void {
  const plot = figure.querySelector<SVGSVGElement>('svg.plot');
  const inner = plot?.querySelector('.inner') ?? null;
  const tools = figure.querySelector('.tools');
  const text = numbersOf(figure);
  if (plot === null || inner === null || tools === null || text === undefined) return;
  const { columns, rows } = readNumbers(text);
  const bands = columns.slice(LABELS).map((name) => {
    const [from = 0, to = from] = name.replace(' Hz', '').split('–').map(Number);
    return { from, to };
  });
  const height = Number(inner.getAttribute('height'));
  const sliders = [
    make('input', { type: 'range', min: '0', max: String(rows.length - 1), value: '0' }),
    make('input', { type: 'range', min: '0', max: String(bands.length - 1), value: '0' }),
  ] as const;
  const shown = make('output');
  tools.append(make('label', {}, 'Take ', sliders[0]), make('label', {}, 'Frequency ', sliders[1]), shown);
  shown.textContent = 'Point at a cell, or use the two sliders.';
  const lines = [makeSvg('line', { class: 'cursor' }), makeSvg('line', { class: 'cursor' })] as const;
  for (const line of lines) line.style.display = 'none';
  plot.querySelector('g')?.append(...lines);

  const entry = (list: readonly string[] | undefined, r: number, c: number): string | undefined => {
    const cells = list?.[r]?.split(',');
    if (cells === undefined) return undefined;
    let at = c;
    while (at > 0 && cells[at] === '') at--;
    return cells[at] === '-' ? '' : cells[at];
  };
  const show = (r: number, c: number) => {
    const row = rows[r];
    const band = bands[c];
    if (row === undefined || band === undefined) return;
    sliders[0].value = String(r);
    sliders[1].value = String(c);
    const residual = row[LABELS + c] ?? '';
    const pair = row[1] === '' ? '' : ` (${row[1]} > ${row[2]})`;
    const take = entry(data.take, r, c) ?? `${row[0]}${pair}`;
    const frequency = frequencyText(Number(entry(data.frequency, r, c) ?? band.from), 5);
    const u = entry(data.u, r, c) ?? '';
    const what =
      residual === ''
        ? 'not measured'
        : `residual ${Number(residual) > 0 ? '+' : ''}${residual.replace('-', '\u2212')} dB${u === '' ? '' : `, u ${u} dB`}`;
    const said = `${take}, ${frequency}: ${what}`;
    shown.textContent = said;
    for (const slider of sliders) slider.setAttribute('aria-valuetext', said);
    const part = partOf(plot, zoomed.viewOf(plot), Math.sqrt(band.from * band.to));
    const y = String(((r + 0.5) / rows.length) * height);
    for (const line of lines) line.style.display = part >= 0 && part <= 1 ? '' : 'none';
    for (const [name, value] of Object.entries({
      x1: `${100 * part}%`,
      x2: `${100 * part}%`,
      y1: '0',
      y2: String(height),
    })) {
      lines[0].setAttribute(name, value);
    }
    for (const [name, value] of Object.entries({ x1: '0%', x2: '100%', y1: y, y2: y }))
      lines[1].setAttribute(name, value);
  };
  for (const slider of sliders) {
    for (const kind of ['input', 'focus']) {
      slider.addEventListener(kind, () => show(Number(sliders[0].value), Number(sliders[1].value)));
    }
  }
  plot.addEventListener('pointermove', (event) => {
    const box = inner.getBoundingClientRect();
    const clamp = (value: number, most: number) => Math.max(0, Math.min(most, value));
    const r = clamp(Math.floor(((event.clientY - box.top) / box.height) * rows.length), rows.length - 1);
    const frequency = frequencyAt(plot, zoomed.viewOf(plot), clamp((event.clientX - box.left) / box.width, 1));
    const beyond = bands.findIndex(({ from }, c) => frequency < Math.sqrt((bands[c - 1]?.to ?? 0) * from));
    show(r, beyond < 0 ? bands.length - 1 : Math.max(0, beyond - 1));
  });
  plot.addEventListener('click', (event) => {
    // A click on a take that disagrees leads to its own picture.
    const box = inner.getBoundingClientRect();
    const r = Math.floor(((event.clientY - box.top) / box.height) * rows.length);
    const target = document.getElementById(`take-${rows[r]?.[0] ?? ''}`);
    if (target !== null && event.clientX >= box.left) target.scrollIntoView();
  });
}

/** Columns of the table before the first frequency. */
const LABELS = 3;
