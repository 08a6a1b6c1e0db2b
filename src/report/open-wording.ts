import type { ExtraTake, OpenFinding } from '../findings/examination.ts';
import { THIRD_UNIT } from '../findings/examination.ts';
import { atFrequencies, FEW_NAMES, hasHave, listText, MOST_NAMES } from './wording.ts';

/** A freedom in words: what is open or rests on a datum, what is known all the same, and the cure. */
export function openSentence(finding: OpenFinding, frequencies: Float64Array): string {
  const at = atFrequencies(finding.frequencies, frequencies);
  const isDatum = finding.status === 'datum';
  const responses = listText(finding.responses, isDatum ? FEW_NAMES : MOST_NAMES);
  const plural = finding.responses.length;
  const opening = isDatum
    ? `Datum ${at}: ${finding.convention}. Without it ${responses} would have no level`
    : `Open ${at}: ${responses} ${hasHave(plural)} no level`;
  const why: Record<OpenFinding['kind'], string> = {
    'no odd loop': ', since no odd loop ties them.',
    'not measured': ', since nothing was measured there.',
    'one constant': ', since the takes tell only sums of emit and receive.',
    path: ', since the takes do not tell the path from the units.',
    gain: ', since the takes do not tell it from the units.',
  };
  return [`${opening}${why[finding.kind]}`, knownSentence(finding), cureSentence(finding)]
    .filter((sentence) => sentence !== '')
    .join(' ');
}

function knownSentence({ kind, sides, status }: OpenFinding): string {
  const isTold = kind === 'no odd loop' || (kind === 'one constant' && status === 'open');
  if (sides === undefined || !isTold) return '';
  const [one, other] = [...sides].sort((a, b) => b.length - a.length) as [readonly string[], readonly string[]];
  if (other.length === 0) return '';
  if (one.length === 1) return `Known is the sum ${one[0]} + ${other[0]}.`;
  const differences = [one, other].filter((side) => side.length > 1).map((side) => listText(side, FEW_NAMES));
  return `Known are the differences among ${differences.join(', among ')}, and the sums of one of ${listText(one, FEW_NAMES)} with ${other.length === 1 ? '' : 'one of '}${listText(other, FEW_NAMES)}.`;
}

function cureSentence({ kind, extraTakes }: OpenFinding): string {
  const texts = extraTakes.map((take) => extraTakeText(take, extraTakes.length > 1));
  // A take between two directional parts leaves one constant for both instead of one for each.
  const tie =
    kind === 'one constant' && texts.length > 0 ? `A take would tie them to the others: ${texts.join()}. ` : '';
  if (texts.length > 0 && tie === '') {
    return `${texts.length === 1 ? 'One take' : 'These takes together'} would settle it: ${listText(texts)}.`;
  }
  const cures: Record<OpenFinding['kind'], string> = {
    'no odd loop': 'A reference for one of them (--refs) would settle it.',
    'not measured': 'A take of it at these frequencies would settle it.',
    'one constant': 'A reference (--refs) or a reversible unit (--reversible) would settle it.',
    path: 'A known level of the path (--path FILE) would settle it.',
    gain: 'A known gain (gain_db) or a reference (--refs) would settle it.',
  };
  return tie + cures[kind];
}

/** `A > B`, with the path it must go over. */
export function extraTakeText({ emitter, receiver, path }: ExtraTake, isOneOfSeveral = false): string {
  const to = receiver === THIRD_UNIT && isOneOfSeveral ? `${THIRD_UNIT} (the same each time)` : receiver;
  return path === '' ? `${emitter} > ${to}` : `${emitter} > ${to} over ${path}`;
}
