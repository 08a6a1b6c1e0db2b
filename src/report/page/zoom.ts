/// <reference lib="dom" />
import { select } from 'd3-selection';
import { type D3ZoomEvent, zoom, zoomIdentity } from 'd3-zoom';
import { frequencyAxis, frequencyScale } from '../figures/frequency-axis.ts';
import { button, make } from './dom.ts';

/** What is seen of a plot: from and to as parts of its whole width. */
export interface View {
  readonly from: number;
  readonly to: number;
}

export interface Zoomed {
  readonly viewOf: (plot: SVGSVGElement) => View;
  /** Calls back after every change of view. */
  readonly onChange: (act: () => void) => void;
}

const MOST = 40;

/** How far in, and where the left edge of the plot is, in widths of the plot as it is seen: 0 or below. */
interface Position {
  readonly k: number;
  readonly x: number;
}

const WHOLE: Position = { k: 1, x: 0 };

/**
 * Zoom along frequency, with the pointer (Ctrl and wheel, pinch, drag when zoomed, double click) and with buttons. All plots
 * over the same range of frequencies move together.
 */
export function addZoom(plots: readonly SVGSVGElement[]): Zoomed {
  const listeners: (() => void)[] = [];
  const views = new Map<SVGSVGElement, View>();
  const groups = new Map<string, SVGSVGElement[]>();
  for (const plot of plots) {
    const key = plot.dataset.range ?? '';
    groups.set(key, [...(groups.get(key) ?? []), plot]);
  }
  const changed = () => {
    for (const act of listeners) act();
  };
  for (const group of groups.values()) addZoomTo(group, views, changed);
  return { viewOf: (plot) => views.get(plot) ?? { from: 0, to: 1 }, onChange: (act) => listeners.push(act) };
}

function addZoomTo(plots: readonly SVGSVGElement[], views: Map<SVGSVGElement, View>, changed: () => void): void {
  let current = WHOLE;
  const groups: ZoomButtons[] = [];
  const show = (wanted: Position) => {
    const k = Math.max(1, Math.min(MOST, wanted.k));
    current = { k, x: Math.min(0, Math.max(1 - k, wanted.x)) };
    const view = { from: -current.x / k, to: (1 - current.x) / k };
    for (const plot of plots) {
      draw(plot, view);
      views.set(plot, view);
      keepInStep(plot);
    }
    for (const { outwards } of groups) for (const one of outwards) one.hidden = k === 1;
    changed();
  };
  // Where the pointer moves on to another plot, it continues from what is seen there.
  const keepInStep = (plot: SVGSVGElement) =>
    select(plot).property('__zoom', zoomIdentity.translate(current.x * widthOf(plot), 0).scale(current.k));
  const behaviour = zoom<SVGSVGElement, unknown>()
    .scaleExtent([1, MOST])
    .extent(function () {
      return [
        [0, 0],
        [widthOf(this), 1],
      ];
    })
    .constrain((transform, [, [width]]) => {
      const x = Math.min(0, Math.max(width * (1 - transform.k), transform.x));
      return zoomIdentity.translate(x, 0).scale(transform.k);
    })
    .filter((event: Event) => {
      if (event.type === 'wheel') return (event as WheelEvent).ctrlKey || (event as WheelEvent).metaKey;
      if (event.type.startsWith('touch')) return current.k > 1 || (event as TouchEvent).touches.length > 1;
      return event.type === 'dblclick' || current.k > 1;
    })
    .on('zoom', function (this: SVGSVGElement, { transform, sourceEvent }: D3ZoomEvent<SVGSVGElement, unknown>) {
      if (sourceEvent !== null) show({ k: transform.k, x: transform.x / widthOf(this) });
    });
  for (const plot of plots) {
    select(plot).call(behaviour);
    plot.style.touchAction = 'pan-y';
    const tools = toolsOf(plot);
    if (tools === undefined || tools.querySelector('.zoom') !== null) continue;
    const group = zoomButtons(() => current, show);
    groups.push(group);
    tools.prepend(group.element);
  }
  addEventListener('resize', () => plots.forEach(keepInStep));
}

function widthOf(plot: SVGSVGElement): number {
  return plot.getBoundingClientRect().width || 1;
}

interface ZoomButtons {
  readonly element: HTMLElement;
  /** Those that do nothing while the whole range is seen. */
  readonly outwards: readonly HTMLElement[];
}

function zoomButtons(position: () => Position, show: (wanted: Position) => void): ZoomButtons {
  const step = (factor: number) => () => {
    const { k, x } = position();
    const wanted = Math.max(1, Math.min(MOST, k * factor));
    show({ k: wanted, x: 0.5 - ((0.5 - x) / k) * wanted });
  };
  const move = (part: number) => () => show({ ...position(), x: position().x - part });
  const named = (text: string, label: string, act: () => void) => {
    const made = button(text, act);
    made.setAttribute('aria-label', label);
    return made;
  };
  const inwards = named('+', 'Zoom in along frequency', step(2));
  const outwards = [
    named('\u2212', 'Zoom out along frequency', step(1 / 2)),
    named('\u2190', 'Towards lower frequencies', move(-0.5)),
    named('\u2192', 'Towards higher frequencies', move(0.5)),
    button('Whole range', () => show(WHOLE)),
  ];
  for (const one of outwards) one.hidden = true;
  const element = make('span', { class: 'zoom', role: 'group', 'aria-label': 'Zoom' }, 'Zoom ', inwards, ...outwards);
  return { element, outwards };
}

function toolsOf(plot: SVGSVGElement): Element | undefined {
  const figure = plot.closest('figure');
  if (figure === null) return undefined;
  const found = figure.querySelector('.tools');
  if (found !== null) return found;
  const tools = make('div', { class: 'tools' });
  figure.querySelector('figcaption')?.after(tools);
  return tools;
}

function draw(plot: SVGSVGElement, { from, to }: View): void {
  const inner = plot.querySelector<SVGSVGElement>('.inner');
  const axis = plot.querySelector('.x-axis');
  const [low = 1, high = 1] = (plot.dataset.range ?? '').split(' ').map(Number);
  if (inner === null || axis === null) return;
  inner.dataset.whole ??= inner.getAttribute('viewBox') ?? '';
  const [, , width = 1, height = 1] = inner.dataset.whole.split(' ').map(Number);
  inner.setAttribute('viewBox', `${from * width} 0 ${(to - from) * width} ${height}`);
  const at = (part: number) => low * (high / low) ** part;
  axis.innerHTML = frequencyAxis([at(from), at(to)], Number(inner.getAttribute('height')));
  // Names at the right end belong to levels that are no longer in sight.
  plot.querySelector('.end-labels')?.classList.toggle('hidden-series', to < 1 - 1e-9);
  for (const mark of plot.querySelectorAll<SVGElement>('[data-at]')) {
    const part = (Number(mark.dataset.at) - from) / (to - from);
    mark.setAttribute('x', `${100 * part}%`);
    mark.style.display = part < 0 || part > 1 ? 'none' : '';
  }
}

/** The frequency at a part of the plot as it is seen. */
export function frequencyAt(plot: SVGSVGElement, { from, to }: View, part: number): number {
  const [low = 1, high = 1] = (plot.dataset.range ?? '').split(' ').map(Number);
  return low * (high / low) ** (from + part * (to - from));
}

/** Where a frequency stands as part of the plot as it is seen. */
export function partOf(plot: SVGSVGElement, { from, to }: View, frequency: number): number {
  const [low = 1, high = 1] = (plot.dataset.range ?? '').split(' ').map(Number);
  return (frequencyScale([low, high])(frequency) - from) / (to - from);
}
