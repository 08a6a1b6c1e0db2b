import type { TakeFinding } from '../../findings/examination.ts';
import type { Figure } from '../figures/figure.ts';
import { MOST_TAKES } from '../figures/figures.ts';
import { escaped } from '../figures/markup.ts';
import type { Result } from '../result.ts';
import { flaggedParagraphs, flaggedTakes, tieGroups, tieSentence } from '../take-wording.ts';
import { counted } from '../wording.ts';
import { figureBlock, type Pieces, paragraph } from './blocks.ts';

/** Every take that disagrees, worst first, then ties; each with its picture. */
export function* flaggedBlocks(result: Result, figures: ReadonlyMap<number, Figure>): Pieces {
  const flagged = flaggedTakes(result.examination);
  const ties = tieGroups(result.examination);
  if (flagged.length + ties.length === 0) {
    const isTested = result.examination.takes.some(({ verdict }) => verdict === 'agrees');
    yield paragraph(isTested ? 'No take stands out.' : 'No take could be tested.');
    return;
  }
  for (const finding of flagged) {
    if (!figures.has(finding.take)) continue;
    const [title = '', ...paragraphs] = flaggedParagraphs(result, finding);
    yield `<article class="take" id="${takeAnchor(result, finding)}"><h3>${escaped(title)}</h3>`;
    yield paragraphs.map((text) => paragraph(text)).join('');
    yield* figureOf(finding, figures);
    yield '</article>';
  }
  for (const group of ties) {
    yield `<article class="take tie">${group.map((finding) => `<span id="${takeAnchor(result, finding)}"></span>`).join('')}`;
    yield paragraph(tieSentence(result, group));
    for (const finding of group) yield* figureOf(finding, figures);
    yield '</article>';
  }
  const more = flagged.length - flagged.filter(({ take }) => figures.has(take)).length;
  if (more > 0) {
    yield paragraph(
      `And ${counted(more, 'more take')} beside these ${MOST_TAKES}, in takes.csv, with what each reads like.`,
    );
  }
}

function takeAnchor({ set }: Result, { take }: TakeFinding): string {
  return `take-${set.takes[take]!.id}`;
}

function figureOf({ take }: TakeFinding, figures: ReadonlyMap<number, Figure>): Pieces {
  const figure = figures.get(take);
  return figure === undefined ? [] : figureBlock(figure);
}
