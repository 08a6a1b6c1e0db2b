import type { OpenFinding } from '../findings/examination.ts';
import type { Model } from '../model/model.ts';
import type { Pattern } from '../model/separability.ts';
import { namedParts } from './known-parts.ts';
import { roundedFrequency } from './number-text.ts';
import { openSentence } from './open-wording.ts';

/** What can be told apart and what cannot, as a record for JSON. */
export function separabilityRecord(
  model: Model,
  patterns: readonly Pattern[],
  open: readonly OpenFinding[],
  frequencies: Float64Array,
): Readonly<Record<string, unknown>> {
  const finding = (entry: OpenFinding) => ({
    kind: entry.kind,
    status: entry.status,
    responses: entry.responses,
    sides: entry.sides ?? null,
    convention: entry.convention === '' ? null : entry.convention,
    ...frequencyRecord(entry.frequencies, frequencies),
    extra_takes: entry.extraTakes.map(({ emitter, receiver, path }) => ({
      emitter,
      receiver,
      path: path === '' ? null : path,
    })),
    statement: openSentence(entry, frequencies),
  });
  return {
    parts: namedParts(model, patterns).map((part) => ({
      responses: part.responses,
      fixed_by: part.oddLoop !== undefined ? 'odd loop' : part.known.length > 0 ? 'known level' : null,
      odd_loop: part.oddLoop ?? null,
      known: part.known,
      sides: part.sides ?? null,
      ...frequencyRecord(part.frequencies, frequencies),
    })),
    open: open.filter((entry) => entry.status === 'open').map(finding),
    datum: open.filter((entry) => entry.status === 'datum').map(finding),
  };
}

/** How many frequencies, and the unbroken runs of them, from–to in hertz. */
function frequencyRecord(indices: readonly number[], frequencies: Float64Array) {
  const runs: [number, number][] = [];
  for (const index of indices) {
    const run = runs.at(-1);
    if (run !== undefined && run[1] === index - 1) run[1] = index;
    else runs.push([index, index]);
  }
  return {
    frequencies: indices.length,
    frequency_runs_hz: runs.map((run) => run.map((index) => roundedFrequency(frequencies[index]!))),
  };
}
