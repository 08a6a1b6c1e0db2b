import type { BentTake } from '../findings/end-slope.ts';
import type { JudgedEnd } from '../findings/level-misfit.ts';
import { coverageFactor } from '../numeric/student-t.ts';
import { roundedText } from '../quantity/rounding.ts';
import type { Result } from './result.ts';
import { bandText } from './wording.ts';

/** Takes named before the rest is only counted. */
const MOST_TAKES = 6;

/** What the level of a take does to its misfit, with advice; empty where nothing is shown. */
export function levelSentences({ examination: { levels }, set }: Result): string[] {
  const shown = [...levels.takes, ...levels.together, ...levels.bands.flatMap(({ upper, lower }) => [upper, lower])]
    .filter(({ isShown }) => isShown)
    .sort((a, b) => a.pAdjusted - b.pAdjusted);
  return (['upper', 'lower'] as const).flatMap((end) => {
    const own = shown.filter((judged) => judged.end === end);
    if (own.length === 0) return [];
    const takes = bentTakes(own);
    const named = takes.slice(0, MOST_TAKES).map(({ take, misfit, from, to }) => {
      const sign = misfit < 0 ? '−' : '+';
      return `${set.takes[take]!.id} (${sign}${Math.abs(misfit).toPrecision(2)} dB at ${bandText({ from, to })})`;
    });
    const more = takes.length > MOST_TAKES ? ` and ${takes.length - MOST_TAKES} more` : '';
    const who = named.length === 0 ? '' : ` Most: ${named.join(', ')}${more}.`;
    return [
      end === 'upper'
        ? `The strongest levels are lower than the rest lets expect, as when an input is overdriven.${who} Take them again with less drive or gain.`
        : `The weakest levels are higher than the rest lets expect, as near a noise floor.${who} Take them again with more drive or more averages.`,
    ];
  });
}

/** Each take once, with its largest misfit; worst first. */
function bentTakes(ends: readonly JudgedEnd[]): BentTake[] {
  const worst = new Map<number, BentTake>();
  for (const bent of ends.flatMap(({ takes }) => takes)) {
    const known = worst.get(bent.take);
    if (known === undefined || Math.abs(bent.misfit) > Math.abs(known.misfit)) worst.set(bent.take, bent);
  }
  return [...worst.values()].sort((a, b) => Math.abs(b.misfit) - Math.abs(a.misfit) || a.take - b.take);
}

/** Units that are not the same from some take on, each with advice. */
export function changeSentences({ examination: { changed }, set, coverage }: Result): string[] {
  return changed.map(({ unit, mount, from, order, shift, uncertainty, dof }) => {
    const expanded = uncertainty * coverageFactor(coverage, dof);
    const size = `${shift < 0 ? '−' : '+'}${roundedText(Math.abs(shift), expanded)} dB ± ${roundedText(expanded, expanded)} dB`;
    const { id, takenAt, emitter, receiver } = set.takes[from]!;
    const when = order === 'time' ? ` (${takenAt})` : ', in the order of the files';
    const name = mount === '' ? unit : `${unit}@${mount}`;
    return `${name} changed by ${size} from ${id}, ${emitter} > ${receiver}${when}, on. Look for what happened to it then: cable, mount, couplant, damage. If it is to count as two, give it two mount labels.`;
  });
}

/** Declared look-alikes that are not alike, or that nothing could test. */
export function lookalikeSentences({ examination: { lookalikes } }: Result): string[] {
  return lookalikes.flatMap(({ one, other, frequencies, beyond, difference, expanded, verdict }) => {
    if (verdict === 'agree') return [];
    if (verdict === 'not testable') {
      return [
        `Whether ${one} and ${other} are look-alikes cannot be tested: without the declaration the takes do not tell them apart.`,
      ];
    }
    const sign = difference < 0 ? '−' : '+';
    const size = `${sign}${roundedText(Math.abs(difference), expanded)} dB ± ${roundedText(expanded, expanded)} dB`;
    return [
      `${one} and ${other} were declared look-alikes and differ: at ${beyond} of ${frequencies} frequencies by more than U, typically ${size}. Leave the declaration out (--lookalikes).`,
    ];
  });
}

/** Bands in which emit and receive differ although the model holds them to be one; empty where there are none. */
export function reciprocitySentences({ examination: { reciprocity } }: Result): string[] {
  if (!reciprocity.speaksAgainstModel) return [];
  const bands = reciprocity.bands.filter(({ verdict }) => verdict === 'emit and receive differ').map(bandText);
  return [
    `Emit and receive differ at ${bands.join(', ')}, where pairs were taken both ways; the reciprocal model takes them for one. Solve with --model directional to see them apart.`,
  ];
}
