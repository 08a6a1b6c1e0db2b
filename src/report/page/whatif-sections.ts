import { escaped } from '../figures/markup.ts';
import { plannedNetwork, plannedRedundancy, predictedUncertainty } from '../figures/planned-figures.ts';
import { openSentence } from '../open-wording.ts';
import type { WhatifResult } from '../whatif-result.ts';
import { solveLine } from '../whatif-sheet.ts';
import {
  designSentence,
  designVerdict,
  openAsTold,
  orderSentence,
  scatterSentence,
  suggestionSentences,
  timesSentence,
} from '../whatif-wording.ts';
import type { Statement } from '../wording.ts';
import { figureBlock, list, type Pieces, paragraph, statements } from './blocks.ts';
import { settingText } from './origin.ts';
import type { Section } from './sections.ts';
import { bandsTable, designsTable, redundancyTable, runTable, unitsTable } from './whatif-blocks.ts';

/** The sections of the page of `whatif`; the run sheet only where the takes have an order. */
export function whatifSections(result: WhatifResult): Section[] {
  const { predictions, ordered, sheet } = result;
  const main = predictions.at(-1)!;
  return [
    {
      id: 'verdict',
      title: 'Verdict',
      question: 'Is this design worth a day at the bench?',
      body: () => verdictBlock(result),
    },
    {
      id: 'designs',
      title: 'Designs side by side',
      question: 'What does each design deliver, and what does it cost?',
      body: () => [designsTable(predictions)],
    },
    {
      id: 'bench',
      title: 'The bench',
      question: 'What will be measured against what, and what does that leave open?',
      body: function* () {
        yield* figureBlock(plannedNetwork(main));
        const { open, frequencies } = openAsTold(main);
        yield list(open.map((finding) => openSentence(finding, frequencies)));
      },
    },
    {
      id: 'units',
      title: 'Predicted uncertainty per unit',
      question: 'How sure will each unit’s response be?',
      body: () => [...figureBlock(predictedUncertainty(main)), unitsTable(main, result.effect), bandsTable(main)],
    },
    {
      id: 'takes',
      title: 'Redundancy per take',
      question: 'Which takes would be found out if they went wrong?',
      body: () => [...figureBlock(plannedRedundancy(main)), redundancyTable(main)],
    },
    ...(ordered === undefined && sheet === undefined
      ? []
      : [
          {
            id: 'run',
            title: 'Run sheet',
            question: 'What is to be mounted and taken, in which order?',
            body: () => runBlock(result),
          },
        ]),
    {
      id: 'made',
      title: 'How it was made',
      question: 'What do these figures rest on?',
      body: () => madeBlock(result),
    },
  ];
}

function* verdictBlock({ predictions, suggested }: WhatifResult): Pieces {
  const main = predictions.at(-1)!;
  if (suggested !== undefined) {
    yield '<h3>Suggested takes</h3>';
    yield statements(
      suggestionSentences(suggested).map(
        (text): Statement => ({ text, tone: text.startsWith('CANNOT') ? 'bad' : 'plain' }),
      ),
    );
  }
  for (const prediction of suggested === undefined ? predictions : [main]) {
    if (predictions.length > 1 || suggested !== undefined) {
      yield `<h3>${escaped(prediction.bench.design.name)}</h3>`;
    }
    yield paragraph(designSentence(prediction));
    yield statements(designVerdict(prediction));
  }
}

function* runBlock(result: WhatifResult): Pieces {
  const { predictions, sheet } = result;
  const sentence = orderSentence(result);
  if (sentence !== '') yield paragraph(sentence);
  yield runTable(predictions.at(-1)!.bench.design.seatings, sheet);
  if (sheet === undefined) return;
  yield paragraph(`The sheet to fill in is ${sheet.csv}. Then:`);
  yield `<p><code>${escaped(solveLine(sheet))}</code></p>`;
}

function* madeBlock(result: WhatifResult): Pieces {
  const { version, predictions, settings, notices } = result;
  const main = predictions.at(-1)!;
  yield '<h3>Assumptions</h3>';
  yield list([
    'Nothing was measured for this page: uncertainties follow from what is taken against what, and from the scatter.',
    scatterSentence(main.bands.map(({ scatter }) => scatter)),
    timesSentence(result),
  ]);
  if (notices.length > 0) yield `<h3>Worth knowing</h3>${list(notices)}`;
  const entries = [
    ['Program', `oddloop ${version}`],
    ['Model', main.bench.model.choice.kind],
    ...Object.entries(settings).map(([name, value]) => [name, settingText(value)]),
  ];
  const items = entries.map(([name = '', text = '']) => `<dt>${escaped(name)}</dt><dd>${escaped(text)}</dd>`);
  yield `<h3>Settings</h3><dl>${items.join('')}</dl>`;
}
