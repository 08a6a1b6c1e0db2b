import type { Take } from '../takes/take-set.ts';
import { unitsOf } from './bench-counts.ts';
import { displayWidth, TERMINAL_WIDTH, textTable, wrapped } from './text-layout.ts';

/** Receivers with longer names than this stand as numbers, with a key. */
const WIDEST_HEADING = 8;
/** The emitters' column takes no more than this, so that counts have room beside it. */
const WIDEST_LABEL = 30;
const GAP = 2;

/**
 * How many takes there are of each emitter (rows) and receiver (columns), `·` for none, as lines of at most 80 columns;
 * where the receivers are many, one table under the other, each with the emitters that have takes in it.
 */
export function pairMatrix(takes: readonly Take[]): string[] {
  const units = unitsOf(takes);
  const emitters = units.filter((unit) => takes.some((take) => take.emitter === unit));
  const receivers = units.filter((unit) => takes.some((take) => take.receiver === unit));
  const counts = new Map<string, number>();
  const key = (emitter: string, receiver: string) => JSON.stringify([emitter, receiver]);
  for (const { emitter, receiver } of takes) {
    counts.set(key(emitter, receiver), (counts.get(key(emitter, receiver)) ?? 0) + 1);
  }
  const usesNumbers = receivers.some((receiver) => displayWidth(receiver) > WIDEST_HEADING);
  const headings = receivers.map((receiver, number) => (usesNumbers ? String(number + 1) : receiver));
  const label = Math.min(WIDEST_LABEL, Math.max(...['emitter'].concat(emitters).map(displayWidth)));
  const cell = GAP + Math.max(...[...headings, ...[...counts.values()].map(String)].map(displayWidth));
  const perTable = Math.max(1, Math.floor((TERMINAL_WIDTH - label) / cell));
  const tables: string[][] = [];
  for (let first = 0; first < receivers.length; first += perTable) {
    const shown = receivers.slice(first, first + perTable);
    const rows = emitters
      .map((emitter) => ({ emitter, own: shown.map((receiver) => counts.get(key(emitter, receiver)) ?? 0) }))
      // Where there are several tables, emitters without a take in one of them would only fill it with dots.
      .filter(({ own }) => shown.length === receivers.length || own.some((count) => count > 0))
      .map(({ emitter, own }) => ({ cells: [emitter, ...own.map((count) => (count === 0 ? '·' : String(count)))] }));
    const width = label + shown.length * cell;
    tables.push(textTable([{ cells: ['emitter', ...headings.slice(first, first + perTable)] }, ...rows], width));
  }
  const legend = usesNumbers
    ? wrapped(`Receivers: ${receivers.map((receiver, number) => `${number + 1} ${receiver}`).join(', ')}`, {
        indent: '  ',
      })
    : [];
  return [...tables.flatMap((table, t) => (t === 0 ? table : ['', ...table])), ...legend];
}
