import { area, line } from 'd3-shape';

/** Points of a curve in a drawing's units; y is NaN where there is none. */
export interface Points {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

/** Decimals of positions: a tenth of a pixel. */
const DIGITS = 1;

/** The path of a curve, broken where a value is missing; a value between two gaps is a dot. */
export function curvePath({ x, y }: Points): string {
  const path = line<number>(
    (k) => x[k]!,
    (k) => y[k]!,
  )
    .defined((k) => !Number.isNaN(y[k]!))
    .digits(DIGITS);
  return path(corners(y, y)) ?? '';
}

/**
 * The path of the area between two curves over the same x; a value between two gaps has no area. Where there are more than
 * two points a column, each column is as high as the highest and as low as the lowest of its points.
 */
export function ribbonPath(
  x: Float64Array,
  low: Float64Array,
  high: Float64Array,
  { width, columns }: { readonly width: number; readonly columns: number },
): string {
  const lower = thinned({ x, y: low }, width, columns, 'highest');
  const upper = thinned({ x, y: high }, width, columns, 'lowest');
  const path = area<number>(
    (k) => lower.x[k]!,
    (k) => lower.y[k]!,
    (k) => upper.y[k]!,
  )
    .defined((k) => !Number.isNaN(lower.y[k]!) && !Number.isNaN(upper.y[k]!))
    .digits(DIGITS);
  return path(corners(lower.y, upper.y)) ?? '';
}

/** Indices of the points without those in the middle of a level stretch, which the line passes through anyway. */
function corners(a: Float64Array, b: Float64Array): number[] {
  const isLevel = (values: Float64Array, k: number) => values[k - 1] === values[k] && values[k] === values[k + 1];
  const kept: number[] = [];
  for (let k = 0; k < a.length; k++) if (!isLevel(a, k) || !isLevel(b, k)) kept.push(k);
  return kept;
}

/**
 * Points of a curve such that no peak is lost: at most two a column of the drawing, its lowest and its highest in their
 * order, or one of the two in its middle. A gap stays where a column has no value at all. Curves with fewer than two points
 * a column are returned as they are.
 * @param columns over the whole width; x runs from 0 to `width`.
 */
export function thinned(
  points: Points,
  width: number,
  columns: number,
  keep: 'both' | 'lowest' | 'highest' = 'both',
): Points {
  const count = points.x.length;
  if (count <= 2 * columns) return points;
  const x: number[] = [];
  const y: number[] = [];
  const take = (k: number, at = points.x[k]!) => {
    x.push(at);
    y.push(points.y[k]!);
  };
  let start = 0;
  while (start < count) {
    const column = columnOf(points.x[start]!, width, columns);
    let low = start;
    let high = start;
    let end = start;
    for (; end < count && columnOf(points.x[end]!, width, columns) === column; end++) {
      // Comparisons with NaN are false: the first number takes the place of a gap.
      if (points.y[end]! < points.y[low]! || Number.isNaN(points.y[low]!)) low = end;
      if (points.y[end]! > points.y[high]! || Number.isNaN(points.y[high]!)) high = end;
    }
    const middle = (points.x[start]! + points.x[end - 1]!) / 2;
    if (keep === 'both') {
      take(Math.min(low, high));
      if (low !== high) take(Math.max(low, high));
    } else take(keep === 'lowest' ? low : high, middle);
    start = end;
  }
  return { x: Float64Array.from(x), y: Float64Array.from(y) };
}

function columnOf(x: number, width: number, columns: number): number {
  return Math.min(columns - 1, Math.floor((x / width) * columns));
}
