import { element, escaped } from './markup.ts';
import { shortName } from './short-name.ts';

export interface EndLabel {
  readonly name: string;
  /** Pixels from the top of the plot. */
  readonly y: number;
  /** Classes of its colour. */
  readonly class: string;
  readonly series: string;
}

/** Pixels between the lines of two labels. */
export const LABEL_DISTANCE = 12.5;

/** Names at the right end of curves, moved apart where they would meet, each with a line to its curve. */
export function endLabels(labels: readonly EndLabel[], height: number): string {
  const sorted = [...labels].sort((a, b) => a.y - b.y);
  const places = spread(
    sorted.map(({ y }) => y),
    Math.min(LABEL_DISTANCE, height / Math.max(1, sorted.length - 1)),
    [4, height - 2],
  );
  const content = sorted.map(({ name, y, class: colour, series }, k) => {
    const at = places[k]!;
    const leader = element('path', { d: `M1 ${y.toFixed(1)}L9 ${at.toFixed(1)}h4`, class: 'leader' });
    const text = element('text', { x: 16, y: at + 4, class: `small bold ${colour}` }, escaped(shortName(name, 8)));
    return element('g', { class: series }, leader + text);
  });
  return element('svg', { x: '100%', overflow: 'visible', class: 'end-labels' }, content.join(''));
}

/** Ascending positions moved as little as a few passes need, so that neighbours are at least `distance` apart. */
export function spread(
  positions: readonly number[],
  distance: number,
  [low, high]: readonly [number, number],
): number[] {
  if (positions.length === 0) return [];
  const moved = [...positions];
  const last = moved.length - 1;
  for (let k = 1; k <= last; k++) moved[k] = Math.max(moved[k]!, moved[k - 1]! + distance);
  moved[last] = Math.min(moved[last]!, high);
  for (let k = last - 1; k >= 0; k--) moved[k] = Math.min(moved[k]!, moved[k + 1]! - distance);
  // Half of the way back from where the first pass has pushed, so that a crowd is moved to both sides.
  for (let k = 0; k <= last; k++) {
    const least = k === 0 ? low : moved[k - 1]! + distance;
    const most = moved[k]!;
    moved[k] = Math.max(least, Math.min(most, positions[k]! + (most - positions[k]!) / 2));
  }
  return moved;
}
