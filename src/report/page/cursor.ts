/// <reference lib="dom" />
/// <reference lib="dom.iterable" />
import { frequencyText } from '../../quantity/frequency.ts';
import { make, makeSvg } from './dom.ts';
import { readNumbers, rowAt } from './numbers-reader.ts';
import { numbersOf } from './numbers-table.ts';
import { frequencyAt, partOf, type Zoomed } from './zoom.ts';

/** A cursor over frequency, by pointer or by a slider, that reads out every curve which is shown. */
export function addCursor(figure: HTMLElement, zoomed: Zoomed): void {
  const plot = figure.querySelector<SVGSVGElement>('svg.plot');
  const tools = figure.querySelector('.tools');
  const text = numbersOf(figure);
  if (plot === null || tools === null || text === undefined) return;
  const numbers = readNumbers(text);
  const isBand = numbers.columns[0]?.startsWith('from') === true;
  const items = [...figure.querySelectorAll<HTMLElement>('.legend [data-value]')].map((item) => {
    const value = make('span', { class: 'value' });
    (item.querySelector('button') ?? item).append(value);
    return { item, value, name: item.querySelector('.name')?.textContent ?? '' };
  });
  figure.classList.add('readout');
  const slider = make('input', { type: 'range', min: '0', max: String(numbers.rows.length - 1), value: '0' });
  const shown = make('output');
  tools.append(make('label', {}, 'Cursor ', slider), shown);
  const line = makeSvg('line', {
    class: 'cursor',
    y1: '0',
    y2: plot.querySelector('.inner')?.getAttribute('height') ?? '0',
  });
  line.style.display = 'none';
  plot.querySelector('g')?.append(line);

  let isUsed = false;
  const frequencyOf = (row: readonly string[]) =>
    isBand ? Math.sqrt(Number(row[0]) * Number(row[1])) : Number(row[0]);
  const show = (index: number) => {
    const row = numbers.rows[index];
    if (row === undefined) return;
    const frequency = frequencyOf(row);
    const place = isBand
      ? `${frequencyText(Number(row[0]), 3)} to ${frequencyText(Number(row[1]), 3)}`
      : frequencyText(frequency, 5);
    isUsed = true;
    slider.value = String(index);
    shown.textContent = place;
    const spoken: string[] = [];
    for (const { item, value, name } of items) {
      const [level, expanded] = [row[Number(item.dataset.value)] ?? '', row[Number(item.dataset.expanded)] ?? ''];
      const said =
        level === '' ? 'no level' : `${level.replace('-', '\u2212')}${expanded === '' ? '' : ` \u00b1 ${expanded}`} dB`;
      value.textContent = said;
      if (item.querySelector('[aria-pressed=false]') === null) spoken.push(`${name} ${said}`);
    }
    slider.setAttribute('aria-valuetext', `${place}: ${spoken.join(', ')}`);
    const part = partOf(plot, zoomed.viewOf(plot), frequency);
    line.style.display = part >= 0 && part <= 1 ? '' : 'none';
    line.setAttribute('x1', `${100 * part}%`);
    line.setAttribute('x2', `${100 * part}%`);
  };
  slider.addEventListener('input', () => show(Number(slider.value)));
  slider.addEventListener('focus', () => show(Number(slider.value)));
  plot.addEventListener('pointermove', (event) => {
    const box = plot.getBoundingClientRect();
    const part = Math.max(0, Math.min(1, (event.clientX - box.left) / box.width));
    show(rowAt(numbers, frequencyAt(plot, zoomed.viewOf(plot), part)));
  });
  zoomed.onChange(() => {
    if (isUsed) show(Number(slider.value));
  });
}
