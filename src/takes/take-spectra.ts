import type { Readings } from '../readings/readings.ts';

/**
 * The readings put in order of take and, within a take, of frequency.
 * Take t owns the entries `start[t]` to `start[t + 1]` of `order`; an entry is an index into the readings.
 */
export interface TakeSpectra {
  readonly start: Int32Array;
  readonly order: Int32Array;
}

/** Orders the readings by take and frequency. Cost: linear, where each take's rows already ascend. */
export function takeSpectra(readings: Readings): TakeSpectra {
  const start = new Int32Array(readings.takes.length + 1);
  for (let i = 0; i < readings.count; i++) (start[readings.take[i]! + 1] as number) += 1;
  for (let t = 1; t < start.length; t++) start[t] = start[t]! + start[t - 1]!;
  const next = start.slice(0, -1);
  const order = new Int32Array(readings.count);
  for (let i = 0; i < readings.count; i++) {
    const take = readings.take[i]!;
    order[next[take]!] = i;
    next[take] = next[take]! + 1;
  }
  for (let t = 0; t + 1 < start.length; t++) {
    const own = order.subarray(start[t], start[t + 1]);
    if (!ascends(readings.frequency, own)) own.sort((a, b) => readings.frequency[a]! - readings.frequency[b]! || a - b);
  }
  return { start, order };
}

function ascends(values: Float64Array, order: Int32Array): boolean {
  for (let i = 1; i < order.length; i++) if (values[order[i]!]! < values[order[i - 1]!]!) return false;
  return true;
}
