import type { ComparedPair, Difference } from '../findings/compare-responses.ts';
import type { MatchedSet, Matches } from '../findings/match-responses.ts';
import { frequencyText } from '../quantity/frequency.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { SavedResponse, SavedResult } from '../readings/saved-result.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell, levelCell } from './number-text.ts';
import { placedUnit } from './response-name.ts';
import type { OutputFile, TextStyle } from './result.ts';
import { TERMINAL_WIDTH, textTable, wrapped } from './text-layout.ts';
import { counted, listText, percentText } from './wording.ts';

/** `N01`, `N01@clamped`, `N01 emit`. */
export function savedName(response: SavedResponse): string {
  return response.role === 'both' ? placedUnit(response) : `${placedUnit(response)} ${response.role}`;
}

interface DifferenceRow {
  readonly pair: ComparedPair;
  readonly difference: Difference;
}

/** `differences.csv`: a row a pair and frequency. */
export function differencesTable(result: SavedResult, pairs: readonly ComparedPair[]): OutputFile {
  const name = (index: number) => savedName(result.responses[index]!);
  const columns: readonly Column<DifferenceRow>[] = [
    { name: 'unit_a', text: ({ pair }) => name(pair.first) },
    { name: 'unit_b', text: ({ pair }) => name(pair.second) },
    { name: 'frequency_hz', text: ({ difference }) => frequencyCell(result.frequencies[difference.frequency]!) },
    { name: 'difference_db', text: ({ difference }) => levelCell(difference.level) },
    { name: 'u_db', text: ({ difference }) => figureCell(difference.uncertainty) },
    { name: 'expanded_db', text: ({ difference }) => figureCell(difference.expanded) },
    { name: 'dof', text: ({ difference }) => figureCell(difference.dof) },
    { name: 'u_reseat_db', text: ({ difference }) => figureCell(difference.reseat) },
    { name: 'u_partner_db', text: ({ difference }) => figureCell(difference.partner) },
    { name: 'status', text: ({ difference }) => difference.status },
    { name: 'verdict', text: ({ difference }) => difference.verdict },
  ];
  return csvFile('differences.csv', columns, function* () {
    for (const pair of pairs) for (const difference of pair.differences) yield { pair, difference };
  });
}

/** `matches.csv`: a row a set. */
export function matchesTable(result: SavedResult, { sets }: Matches): OutputFile {
  const columns: readonly Column<MatchedSet>[] = [
    { name: 'units', text: ({ members }) => members.map((member) => savedName(result.responses[member]!)).join(' + ') },
    { name: 'largest_db', text: ({ largest }) => levelCell(largest) },
    { name: 'at_hz', text: ({ at }) => frequencyCell(result.frequencies[at]!) },
    { name: 'probability', text: ({ probability }) => figureCell(probability) },
  ];
  return csvFile('matches.csv', columns, () => sets);
}

/** Frequencies printed of a pair; the rest are in the table. */
const MOST_PRINTED = 15;

/** The differences as a person reads them: a paragraph and a table a pair, at most 15 frequencies evenly spread over it. */
export function differencesText(result: SavedResult, pairs: readonly ComparedPair[], style: TextStyle): string {
  const sections = pairs.map(({ first, second, differences }) => {
    const [a, b] = [first, second].map((index) => savedName(result.responses[index]!));
    const tested = differences.filter(({ verdict }) => verdict !== 'not testable');
    const differ = tested.filter(({ verdict }) => verdict === 'differ');
    const said =
      tested.length === 0
        ? `${a} less ${b}: no uncertainty to hold the difference against.`
        : differ.length === 0
          ? `${a} less ${b}: no more than U (${percentText(result.coverage)}) at ${counted(tested.length, 'frequency', 'frequencies')}.`
          : `${a} less ${b}: more than U (${percentText(result.coverage)}) at ${differ.length} of ${counted(tested.length, 'frequency', 'frequencies')}.`;
    const step = Math.max(1, Math.ceil(differences.length / MOST_PRINTED));
    const rows = differences
      .filter((_, k) => k % step === 0)
      .map(({ frequency, level, expanded, verdict }) => ({
        cells: [
          frequencyText(result.frequencies[frequency]!),
          Number.isNaN(level) ? 'none' : roundedText(level, expanded),
          Number.isNaN(expanded) ? 'none' : roundedText(expanded, expanded),
          verdict,
        ],
      }));
    const head = { cells: ['frequency', 'difference, dB', 'U, dB', 'verdict'], style: style.strong };
    return [...wrapped(said), ...textTable([head, ...rows], TERMINAL_WIDTH, { lastIsWords: true })].join('\n');
  });
  return `${sections.join('\n\n')}\n`;
}

/** Sets printed; the rest are in the table. */
const MOST_SETS = 20;

export function matchesText(
  result: SavedResult,
  { sets, isCut }: Matches,
  { size, within }: { readonly size: number; readonly within: number },
  style: TextStyle,
): string {
  if (sets.length === 0) {
    return `${wrapped(`No ${size} responses agree within ${within} dB at all frequencies of the band.`).join('\n')}\n`;
  }
  const count = isCut ? `More than ${sets.length} sets` : counted(sets.length, 'set');
  const rows = sets.slice(0, MOST_SETS).map(({ members, largest, at, probability }) => ({
    cells: [
      listText(members.map((member) => savedName(result.responses[member]!))),
      largest.toFixed(2),
      frequencyText(result.frequencies[at]!),
      Number.isNaN(probability) ? 'none' : percentText(Number(probability.toFixed(3))),
    ],
  }));
  const head = { cells: ['set', 'largest, dB', 'at', 'truly so'], style: style.strong };
  const caption =
    'largest: largest difference found; truly so: probability that no true difference is above the tolerance, all units as seated.';
  return [
    ...wrapped(`${count} of ${size} responses agree within ${within} dB at all frequencies of the band.`),
    ...textTable([head, ...rows]),
    ...wrapped(caption).map(style.faint),
    '',
  ].join('\n');
}
