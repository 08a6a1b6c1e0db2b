import { changeSentences, levelSentences, lookalikeSentences, reciprocitySentences } from '../agreement-wording.ts';
import { budgetSentence } from '../budget-json.ts';
import type { Figures } from '../figures/figures.ts';
import { element, escaped } from '../figures/markup.ts';
import { dependenceSentences } from '../hold-wording.ts';
import { monteCarloSentence } from '../monte-carlo-json.ts';
import { nextSteps } from '../next-wording.ts';
import { openSentence } from '../open-wording.ts';
import type { Result } from '../result.ts';
import { uncheckedSentences } from '../unchecked-wording.ts';
import { verdict } from '../verdict-wording.ts';
import { allNotices, gainSentence, modelSentences, unusedSentence } from '../wording.ts';
import { figureBlock, list, type Pieces, paragraph, statements } from './blocks.ts';
import { flaggedBlocks } from './flagged-blocks.ts';
import { loopsTableBlock } from './loops-block.ts';
import { fileList, settingsList } from './origin.ts';
import { residualData } from './residual-data.ts';
import { sourceList } from './sources.ts';
import { unitTable } from './unit-table.ts';

export interface Section {
  readonly id: string;
  readonly title: string;
  /** What the reader wants to know. */
  readonly question: string;
  readonly body: () => Pieces;
}

/** The sections of the page in their order; each answers a question of its reader. */
export function sections(result: Result, figures: Figures): Section[] {
  return [
    {
      id: 'verdict',
      title: 'Verdict',
      question: 'Can I sign this? What must I redo first?',
      body: () => [statements(verdict(result)), unitTable(result), nextBlock(result, 3)],
    },
    {
      id: 'bench',
      title: 'The bench',
      question: 'What was measured against what, and what is missing?',
      body: () => [...figureBlock(figures.network), list(openPoints(result))],
    },
    {
      id: 'responses',
      title: 'Responses',
      question: 'What is each unit’s response, and how sure is it?',
      body: function* () {
        yield* modelSentences(result.model).map((sentence) => paragraph(sentence));
        for (const figure of figures.responses) yield* figureBlock(figure);
      },
    },
    {
      id: 'holds',
      title: 'Where it holds',
      question: 'In which bands may I use each response elsewhere?',
      body: function* () {
        if (figures.holds === undefined) yield paragraph('No band could be judged.');
        else yield* figureBlock(figures.holds);
        yield list(dependenceSentences(result));
      },
    },
    {
      id: 'scatter',
      title: 'Scatter',
      question: 'Is it the instrument, the mounting, or the assumption?',
      body: function* () {
        if (figures.scatter !== undefined) yield* figureBlock(figures.scatter);
        else yield paragraph('The takes show none of the steps: nothing was repeated, mounted again, or spare.');
        yield paragraph(result.solution.readingUncertainty.statement);
      },
    },
    {
      id: 'disagreement',
      title: 'Disagreement',
      question: 'Which take, where?',
      body: function* () {
        yield list([
          ...lookalikeSentences(result),
          ...changeSentences(result),
          ...levelSentences(result),
          ...reciprocitySentences(result),
        ]);
        yield* figureBlock(figures.residuals, residualData(result));
      },
    },
    {
      id: 'flagged',
      title: 'Flagged takes',
      question: 'What happened in this take?',
      body: () => flaggedBlocks(result, figures.takes),
    },
    {
      id: 'loops',
      title: 'Loops',
      question: 'Can I check it by hand?',
      body: function* () {
        if (figures.loops !== undefined) yield* figureBlock(figures.loops);
        yield loopsTableBlock(result);
      },
    },
    {
      id: 'uncertainty',
      title: 'Uncertainty',
      question: 'What should I improve?',
      body: function* () {
        const sentences = [budgetSentence(result), monteCarloSentence(result.monteCarlo)];
        yield* sentences.filter((sentence) => sentence !== '').map((sentence) => paragraph(sentence));
        if (figures.budget !== undefined) yield* figureBlock(figures.budget);
        if (figures.uncertainty === undefined) yield paragraph('No uncertainty can be given.');
        else yield* figureBlock(figures.uncertainty);
      },
    },
    {
      id: 'next',
      title: 'Next takes',
      question: 'What do I measure next, and what will it buy?',
      body: () => [nextBlock(result)],
    },
    {
      id: 'origin',
      title: 'How it was made',
      question: 'Can somebody else repeat it?',
      body: () => [
        settingsList(result),
        fileList(result),
        list([
          ...[gainSentence(result), unusedSentence(result.input)].filter((sentence) => sentence !== ''),
          ...allNotices(result.input, result.set),
        ]),
        sourceList(),
      ],
    },
  ];
}

/** What is open or rests on a datum, and what nothing checks. */
function openPoints(result: Result): string[] {
  const { examination, set } = result;
  return [...examination.open.map((finding) => openSentence(finding, set.frequencies)), ...uncheckedSentences(result)];
}

/** What to do next; `most` of it with a pointer to the rest, or all. */
function nextBlock(result: Result, most = Number.POSITIVE_INFINITY): string {
  const steps = nextSteps(result);
  if (steps.length === 0) return paragraph('No further take is called for.');
  const items = steps
    .slice(0, most)
    .map(({ what, why }) => `<li><b>${escaped(what)}.</b> ${escaped(why)}</li>`)
    .join('');
  const rest = steps.length > most ? `<p><a href="#next">All of what to do next</a></p>` : '';
  const heading = Number.isFinite(most) ? '<h3>Do next</h3>' : '';
  return heading + element('ol', { class: 'steps' }, items) + rest;
}
