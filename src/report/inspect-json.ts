import { rangeGroups, seatingCounts, sessionCounts, unitStructures } from './bench-structure.ts';
import { jsonFigure } from './json-text.ts';
import type { Inspection } from './result.ts';
import { separabilityRecord } from './separability-json.ts';
import { countsRecord, inputRecord } from './summary-json.ts';
import { structureVerdict } from './verdict-wording.ts';
import { allNotices } from './wording.ts';

const INSPECTION_SCHEMA = 'oddloop-inspection/1';

/** What `inspect --json` says: the structure of a set, nothing solved. `null` means 'not given' or 'not available'. */
export function inspectRecord(inspection: Inspection): Readonly<Record<string, unknown>> {
  const { version, input, set, model, patterns, open } = inspection;
  const units = unitStructures(inspection);
  const { takes, seatings } = seatingCounts(inspection);
  return {
    schema: INSPECTION_SCHEMA,
    version,
    verdict: structureVerdict(units).text,
    input: inputRecord(input),
    counts: countsRecord(inspection),
    grid: set.grid,
    model: { kind: model.choice.kind, reason: model.choice.reason, datum: model.datum },
    units: units.map(({ mount, ...unit }) => ({ ...unit, mount: orNull(mount) })),
    pairs: pairRecords(set.takes),
    sessions: sessionCounts(inspection).map(({ session, takes: count }) => ({
      session: orNull(session),
      takes: count,
    })),
    seatings: { given: seatings, takes_with_seatings: takes, assumed: takes < set.takes.length },
    ranges: rangeGroups(inspection).map((group) => ({
      from_hz: jsonFigure(group.from, 12),
      to_hz: jsonFigure(group.to, 12),
      readings: group.readings,
      takes: group.takes,
    })),
    ...separabilityRecord(model, patterns.patterns, open, set.frequencies),
    unused_rows: input.unused.map(({ file, line, column, value, reason }) => ({ file, line, column, value, reason })),
    notices: allNotices(input, set),
  };
}

function pairRecords(takes: Inspection['set']['takes']) {
  const counts = new Map<string, { emitter: string; receiver: string; takes: string[] }>();
  for (const { emitter, receiver, id } of takes) {
    const key = JSON.stringify([emitter, receiver]);
    const pair = counts.get(key) ?? { emitter, receiver, takes: [] };
    pair.takes.push(id);
    counts.set(key, pair);
  }
  return [...counts.values()];
}

function orNull(text: string): string | null {
  return text === '' ? null : text;
}
