import { frequencyText } from '../quantity/frequency.ts';
import { placeText } from '../quantity/place.ts';
import { benchCounts } from './bench-counts.ts';
import { rangeGroups, seatingCounts, sessionCounts, type UnitStructure, unitStructures } from './bench-structure.ts';
import { type NamedPart, namedParts } from './known-parts.ts';
import { openSentence } from './open-wording.ts';
import { pairMatrix } from './pair-matrix.ts';
import { placedUnit } from './response-name.ts';
import type { Inspection, TextStyle } from './result.ts';
import { listed } from './terminal-summary.ts';
import { textTable, wrapped } from './text-layout.ts';
import { structureVerdict } from './verdict-wording.ts';
import {
  allNotices,
  atFrequencies,
  counted,
  listText,
  modelSentences,
  readSentence,
  unusedSentence,
} from './wording.ts';

/** Entries of a list before the rest is only counted. */
const MOST_ENTRIES = 12;
const FEW_TAKES = 6;
const FIRST_UNUSED = 5;

/** What `inspect` says, at most 80 columns wide: what the files hold, what can be told apart, and what would cure the rest. */
export function inspectText(inspection: Inspection, style: TextStyle): string {
  const { input, set, model, open } = inspection;
  const units = unitStructures(inspection);
  const { text, tone } = structureVerdict(units);
  const sections: readonly (readonly string[])[] = [
    wrapped(readSentence(input, benchCounts(set, model))),
    wrapped(text).map((line) => (tone === 'plain' ? line : style[tone](line))),
    listed(
      'Open, or resting on a datum',
      open.map((finding) => openSentence(finding, set.frequencies)),
      style,
    ),
    unitLines(units, style),
    [style.strong('Takes of each pair'), ...pairMatrix(set.takes)],
    listed('Bench', [...sessionPoints(inspection), seatingPoint(inspection)], style),
    listed('Frequencies', rangePoints(inspection), style),
    listed('Connected parts', partPoints(inspection), style),
    listed('Model', modelSentences(model), style),
    listed('Worth knowing', [...unusedPoints(inspection), ...allNotices(input, set)], style),
  ];
  return `${sections
    .filter((lines) => lines.length > 0)
    .map((lines) => lines.join('\n'))
    .join('\n\n')}\n`;
}

function unitLines(units: readonly UnitStructure[], style: TextStyle): string[] {
  const count = (value: number) => (value === 0 ? '·' : String(value));
  const rows = units.map(({ emits, receives, partners, frequencies, ...unit }) => ({
    cells: [
      placedUnit(unit),
      ...[emits, receives, partners, frequencies.ok, frequencies.datum, frequencies.open].map(count),
    ],
    style: frequencies.open > 0 ? style.warning : undefined,
  }));
  const header = { cells: ['unit', 'emits', 'receives', 'partners', 'ok', 'datum', 'open'], style: style.strong };
  const caption = 'emits, receives: takes in that role; ok, datum, open: number of frequencies';
  return [...textTable([header, ...rows]), ...wrapped(caption).map(style.faint)];
}

function sessionPoints(inspection: Inspection): string[] {
  const sessions = sessionCounts(inspection);
  if (sessions.length === 1 && sessions[0]!.session === '') return ['No session given: all takes count as one.'];
  const text = ({ session, takes }: { session: string; takes: number }) =>
    `${session === '' ? 'without a name' : session} (${counted(takes, 'take')})`;
  return [`${counted(sessions.length, 'session')}: ${listText(sessions.map(text))}.`];
}

function seatingPoint(inspection: Inspection): string {
  const { takes, seatings } = seatingCounts(inspection);
  const all = inspection.set.takes.length;
  if (takes === 0) return 'No seating given: each pair in each session counts as one seating of each of its units.';
  const given = counted(seatings, 'seating');
  return takes === all
    ? `${given} of the units given.`
    : `${given} of the units given, in ${takes} of ${all} takes; where none is, each pair in each session counts as one seating of each of its units.`;
}

function rangePoints(inspection: Inspection): string[] {
  return capped(rangeGroups(inspection), 'range', ({ from, to, readings, takes }) => {
    const range =
      readings === 0
        ? 'No reading'
        : readings === 1
          ? frequencyText(from)
          : `${frequencyText(from)} to ${frequencyText(to)}, ${counted(readings, 'reading')} each`;
    return `${range}: ${counted(takes.length, 'take')} (${listText(takes, FEW_TAKES)}).`;
  });
}

function partPoints({ set, model, patterns }: Inspection): string[] {
  return capped(namedParts(model, patterns.patterns), 'part', (part) => {
    const at = atFrequencies(part.frequencies, set.frequencies);
    return `${listText(part.responses)}, ${at}: ${tieText(part)}.`;
  });
}

function tieText({ oddLoop, known, sides, responses }: NamedPart): string {
  if (oddLoop?.length === 1) return `a twin reading of ${oddLoop[0]} fixes ${responses.length === 1 ? 'it' : 'them'}`;
  if (oddLoop !== undefined) return `shortest odd loop ${[...oddLoop, oddLoop[0]].join(' - ')}`;
  if (known.length > 0) return `fixed by what is known of ${listText(known)}`;
  if (responses.length === 1) return 'tied to nothing';
  return sides === undefined ? 'tied' : 'no odd loop, so that one constant is open';
}

function unusedPoints({ input }: Inspection): string[] {
  const sentence = unusedSentence(input);
  if (sentence === '') return [];
  const rows = input.unused.slice(0, FIRST_UNUSED).map(({ value, reason, ...place }) => {
    return `${placeText(place)}: ${value === '' ? 'empty' : value} (${reason})`;
  });
  const more = input.unused.length - rows.length;
  return [`${sentence} ${more > 0 ? 'The first of them' : 'Namely'}: ${rows.join('; ')}.`];
}

function capped<Entry>(entries: readonly Entry[], name: string, text: (entry: Entry) => string): string[] {
  const shown = entries.slice(0, MOST_ENTRIES).map(text);
  const more = entries.length - shown.length;
  return more > 0 ? [...shown, `And ${counted(more, `more ${name}`)}.`] : shown;
}
