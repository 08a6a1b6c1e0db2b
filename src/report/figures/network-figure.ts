import { figureTexts } from '../figure-wording.ts';
import type { Result } from '../result.ts';
import type { Figure, LegendEntry } from './figure.ts';
import { element, escaped } from './markup.ts';
import { type Network, type NetworkEdge, networkLayout } from './network-layout.ts';
import { shortName } from './short-name.ts';

const NODE = 6.5;
/** Missing pairs of larger benches would fill the ring with dots; the text counts them. */
const MOST_MISSING = 60;
/** How far an edge with a direction is bent, as part of its length, so that both directions are seen. */
const BEND = 0.08;

/** Units on a ring, pairs as lines, those with a take that disagrees dashed and named. */
export function networkFigure(result: Result): Figure {
  const network = networkLayout(result);
  const { nodes, edges } = network;
  return {
    name: 'network',
    ...figureTexts.network(result, network),
    ...networkSketch(network, 'pair not taken'),
    numbers: {
      columns: [...(network.isDirected ? ['emitter', 'receiver'] : ['unit', 'unit']), 'takes', 'takes that disagree'],
      rows: () =>
        edges.map(({ from, to, takes, flagged: ids }) => [
          nodes[from]!.name,
          nodes[to]!.name,
          String(takes),
          ids.join(' '),
        ]),
    },
  };
}

/** The drawing with its legend; `missingName` says what a dotted line is. */
export function networkSketch(network: Network, missingName: string): Pick<Figure, 'drawing' | 'legend'> {
  const { nodes, edges, missing, width, height } = network;
  const most = Math.max(...edges.map(({ takes }) => takes));
  const faint = edges.length > 200 ? 0.35 : 0.75;
  const lines = edges
    .filter(({ flagged }) => flagged.length === 0)
    .map((edge) =>
      edgeLine(network, edge, { 'stroke-opacity': faint, 'stroke-width': 0.8 + (2.2 * edge.takes) / most }),
    );
  const gaps = (missing.length > MOST_MISSING ? [] : missing).map(([a, b]) =>
    element('path', { d: `M${point(nodes[a]!)}L${point(nodes[b]!)}`, class: 'edge missing' }),
  );
  const flagged = edges.filter((edge) => edge.flagged.length > 0);
  const content =
    ARROW +
    gaps.join('') +
    lines.join('') +
    flagged.map((edge) => edgeLine(network, edge, {}, 'flagged')).join('') +
    nodes.map(nodeMarkup).join('') +
    edgeLabels(network, flagged);
  const isMissingShown = missing.length > 0 && missing.length <= MOST_MISSING;
  return {
    drawing: { kind: 'sketch', width: Math.round(width), height: Math.round(height), content },
    legend: legendOf(network, isMissingShown ? missingName : undefined, flagged.length > 0),
  };
}

const ARROW =
  '<defs><marker id="arrow" viewBox="0 0 8 8" refX="15" refY="4" markerWidth="7" markerHeight="7" markerUnits="userSpaceOnUse" orient="auto">' +
  '<path d="M0 1L7 4L0 7z" class="faint"/></marker></defs>';

function point({ x, y }: { readonly x: number; readonly y: number }): string {
  return `${x.toFixed(1)} ${y.toFixed(1)}`;
}

function edgeLine(
  { nodes, isDirected }: Network,
  { from, to }: NetworkEdge,
  attributes: Readonly<Record<string, number>>,
  look = '',
): string {
  const [a, b] = [nodes[from]!, nodes[to]!];
  const rest = { class: `edge ${look}`, ...attributes, 'marker-end': isDirected ? 'url(#arrow)' : undefined };
  if (from === to) {
    // A unit against itself: a small loop outside the ring.
    const [cx, cy] = [a.x + 11 * Math.cos(a.angle), a.y + 11 * Math.sin(a.angle)];
    return element('circle', { cx, cy, r: 9, class: `edge ${look}`, ...attributes });
  }
  if (!isDirected) return element('path', { d: `M${point(a)}L${point(b)}`, ...rest });
  return element('path', { d: `M${point(a)}Q${point(middleOf(a, b, 2 * BEND))} ${point(b)}`, ...rest });
}

function middleOf(
  a: { readonly x: number; readonly y: number },
  b: { readonly x: number; readonly y: number },
  bend: number,
  part = 0.5,
): { x: number; y: number } {
  return {
    x: a.x + part * (b.x - a.x) - bend * (b.y - a.y),
    y: a.y + part * (b.y - a.y) + bend * (b.x - a.x),
  };
}

function nodeMarkup({ name, x, y, angle, isOpen }: Network['nodes'][number]): string {
  const away = NODE + 7;
  const [cos, sin] = [Math.cos(angle), Math.sin(angle)];
  const anchor = Math.abs(cos) < 0.3 ? 'middle' : cos > 0 ? 'start' : 'end';
  const text = { x: x + away * cos, y: y + away * sin + 4 + 4 * sin, 'text-anchor': anchor, class: 'bold' };
  return (
    element('circle', { cx: x, cy: y, r: NODE, class: isOpen ? 'node open' : 'node' }) +
    element('text', text, escaped(shortName(name, 9) + (isOpen ? ' (open)' : '')))
  );
}

/** Names of takes on their edges, each at the first place along its edge that is free. */
function edgeLabels({ nodes, isDirected }: Network, edges: readonly NetworkEdge[]): string {
  const taken: { x: number; y: number; width: number }[] = [];
  return edges
    .map(({ from, to, flagged }) => {
      const label = flagged.length > 2 ? `${flagged.length} takes` : flagged.join(', ');
      const width = 7.2 * label.length + 8;
      const candidates = [0.5, 0.36, 0.64, 0.26, 0.74].map((part) =>
        middleOf(nodes[from]!, nodes[to]!, isDirected ? BEND : 0, part),
      );
      const isFree = (at: { x: number; y: number }) =>
        taken.every(
          (other) => Math.abs(other.x - at.x) > (other.width + width) / 2 || Math.abs(other.y - at.y) > LABEL_HEIGHT,
        );
      const { x, y } = candidates.find(isFree) ?? candidates[0]!;
      taken.push({ x, y, width });
      const box = { x: x - width / 2, y: y - 9, width, height: LABEL_HEIGHT, rx: 3, class: 'chip' };
      const text = element('text', { x, y: y + 4, class: 'middle small bold flagged' }, escaped(label));
      const link = flagged.length === 1 ? element('a', { href: `#take-${flagged[0]}` }, text) : text;
      return element('rect', box) + link;
    })
    .join('');
}

const LABEL_HEIGHT = 18;

function legendOf({ nodes }: Network, missingName: string | undefined, hasFlagged: boolean): LegendEntry[] {
  const entry = (name: string, sample: string): LegendEntry => ({
    name,
    sample,
    series: undefined,
    value: undefined,
    expanded: undefined,
  });
  const line = (look: string, width?: number) =>
    element('path', { d: 'M0 7h28', class: `edge ${look}`, 'stroke-width': width });
  return [
    entry('pair; thicker: more takes', line('', 2)),
    ...(hasFlagged ? [entry('with a take that disagrees', line('flagged'))] : []),
    ...(missingName === undefined ? [] : [entry(missingName, line('missing'))]),
    ...(nodes.some(({ isOpen }) => isOpen)
      ? [entry('open: no level', element('circle', { cx: 14, cy: 7, r: 5.5, class: 'node open' }))]
      : []),
  ];
}
