import type { TakeSet } from '../../takes/take-set.ts';
import { placedUnit } from '../response-name.ts';
import type { Result } from '../result.ts';
import { flaggedTakes, tieGroups } from '../take-wording.ts';

/** A unit in its mount, as a node. */
export interface NetworkNode {
  readonly name: string;
  /** Pixels. */
  readonly x: number;
  readonly y: number;
  /** Direction from the middle of its ring, in radians. */
  readonly angle: number;
  /** Whether it has no level at some frequency. */
  readonly isOpen: boolean;
}

/** All takes of a pair. */
export interface NetworkEdge {
  readonly from: number;
  readonly to: number;
  readonly takes: number;
  /** Ids of those that disagree or are tied. */
  readonly flagged: readonly string[];
}

export interface Network {
  readonly nodes: readonly NetworkNode[];
  readonly edges: readonly NetworkEdge[];
  /** Pairs of the same connected part without a take, as indices of nodes. */
  readonly missing: readonly (readonly [number, number])[];
  /** Connected parts: 1 where everything hangs together. */
  readonly parts: number;
  /** Whether an edge runs from emitter to receiver. */
  readonly isDirected: boolean;
  readonly width: number;
  readonly height: number;
}

/** Pixels: of a ring's radius, which grows with its units, and around rings for names. */
const RADIUS = { least: 70, aUnit: 16, most: 280 };
const MARGIN = 58;
const WIDEST = 720;

/** What a network is drawn of. */
export interface NetworkSource {
  readonly takes: TakeSet['takes'];
  readonly isDirected: boolean;
  /** Indices of takes that disagree or are tied. */
  readonly disagreeing: ReadonlySet<number>;
  /** Units in their mounts, as they are named to readers, that have no level at some frequency. */
  readonly open: ReadonlySet<string>;
  /** Units that no take names. */
  readonly untaken: readonly string[];
}

/** The network of a result. */
export function networkLayout({ set, model, examination }: Result): Network {
  return networkOf({
    takes: set.takes,
    isDirected: model.choice.kind === 'directional',
    disagreeing: new Set([...flaggedTakes(examination), ...tieGroups(examination).flat()].map(({ take }) => take)),
    open: new Set(
      examination.units
        .filter(({ counts }) => counts.open > 0)
        .map(({ response }) => placedUnit(model.responses[response]!)),
    ),
    untaken: [],
  });
}

/** Units on a ring for each connected part, rings side by side; in the order units are first named. */
export function networkOf({ takes, isDirected, disagreeing, open, untaken }: NetworkSource): Network {
  const names: string[] = [];
  const indexOf = new Map<string, number>();
  const place = (unit: string, mount: string) => {
    const name = placedUnit({ unit, mount });
    const found = indexOf.get(name) ?? names.push(name) - 1;
    indexOf.set(name, found);
    return found;
  };
  const edges = new Map<string, { from: number; to: number; takes: number; flagged: string[] }>();
  for (const [t, take] of takes.entries()) {
    const ends = [place(take.emitter, take.emitterMount), place(take.receiver, take.receiverMount)] as const;
    const [from, to] = isDirected ? ends : ([Math.min(...ends), Math.max(...ends)] as const);
    const edge = edges.get(`${from} ${to}`) ?? { from, to, takes: 0, flagged: [] };
    edge.takes++;
    if (disagreeing.has(t)) edge.flagged.push(take.id);
    edges.set(`${from} ${to}`, edge);
  }
  for (const unit of untaken) place(unit, '');
  const parts = connectedParts(names.length, [...edges.values()]);
  const { places, width, height } = ringPlaces(parts);
  const nodes = names.map((name, n): NetworkNode => ({ name, ...places.get(n)!, isOpen: open.has(name) }));
  const missing = parts.flatMap((part) =>
    part.flatMap((a, k) =>
      part
        .slice(k + 1)
        .filter((b) => !edges.has(`${a} ${b}`) && !edges.has(`${b} ${a}`))
        .map((b) => [a, b] as const),
    ),
  );
  return { nodes, edges: [...edges.values()], missing, parts: parts.length, isDirected, width, height };
}

function connectedParts(count: number, edges: readonly { readonly from: number; readonly to: number }[]): number[][] {
  const root = Array.from({ length: count }, (_, n) => n);
  const find = (n: number): number => {
    let top = n;
    while (root[top] !== top) top = root[top]!;
    return top;
  };
  for (const { from, to } of edges) {
    const [a, b] = [find(from), find(to)];
    root[Math.max(a, b)] = Math.min(a, b);
  }
  const parts = new Map<number, number[]>();
  for (let n = 0; n < count; n++) parts.set(find(n), [...(parts.get(find(n)) ?? []), n]);
  return [...parts.values()];
}

function ringPlaces(parts: readonly (readonly number[])[]) {
  const places = new Map<number, { x: number; y: number; angle: number }>();
  let [left, top, rowHeight, width] = [0, 0, 0, 0];
  for (const part of parts) {
    const radius = part.length === 1 ? 0 : Math.max(RADIUS.least, Math.min(RADIUS.most, part.length * RADIUS.aUnit));
    const size = 2 * (radius + MARGIN);
    if (left > 0 && left + size > WIDEST) [left, top, rowHeight] = [0, top + rowHeight, 0];
    part.forEach((n, k) => {
      // The first unit at the top, the rest clockwise.
      const angle = (2 * Math.PI * k) / part.length - Math.PI / 2;
      const [x, y] = [left + size / 2 + radius * Math.cos(angle), top + size / 2 + radius * Math.sin(angle)];
      places.set(n, { x, y, angle });
    });
    left += size;
    width = Math.max(width, left);
    rowHeight = Math.max(rowHeight, size);
  }
  return { places, width, height: top + rowHeight };
}
