/// <reference lib="dom" />
/// <reference lib="dom.iterable" />
import { button, make } from './dom.ts';

/** Entries of curves become buttons that show and hide them; pointing at one sets it off from the others. */
export function addLegend(figure: HTMLElement, legend: Element): void {
  const items = [...legend.querySelectorAll<HTMLElement>('[data-series]')];
  if (items.length < 2) return;
  const partsOf = (item: HTMLElement) => [...figure.querySelectorAll(`.plot .${item.dataset.series ?? ''}`)];
  const toggles = items.map((item) => {
    const own = make('button', { type: 'button', 'aria-pressed': 'true' }, ...item.childNodes);
    const set = (isShown: boolean) => {
      own.setAttribute('aria-pressed', String(isShown));
      for (const part of partsOf(item)) part.classList.toggle('hidden-series', !isShown);
    };
    own.addEventListener('click', () => set(own.getAttribute('aria-pressed') !== 'true'));
    const setOff = (isOn: boolean) => {
      for (const other of items) {
        if (other !== item) for (const part of partsOf(other)) part.classList.toggle('dim', isOn);
      }
    };
    for (const [kind, isOn] of [
      ['pointerenter', true],
      ['pointerleave', false],
      ['focus', true],
      ['blur', false],
    ] as const) {
      own.addEventListener(kind, () => setOff(isOn));
    }
    item.append(own);
    return set;
  });
  if (items.length < 4) return;
  const all = (isShown: boolean) => () => {
    for (const set of toggles) set(isShown);
  };
  legend.before(make('div', { class: 'series-tools' }, button('Show all', all(true)), button('Hide all', all(false))));
}
