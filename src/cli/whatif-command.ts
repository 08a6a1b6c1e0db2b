import { InputError } from '../quantity/input-fault.ts';
import { jsonText } from '../report/json-text.ts';
import { whatifRecord } from '../report/whatif-json.ts';
import type { SuggestedTakes, WhatifResult } from '../report/whatif-result.ts';
import { sheetFile, sheetPage } from '../report/whatif-sheet.ts';
import { whatifFiles } from '../report/whatif-tables.ts';
import { whatifText } from '../report/whatif-text.ts';
import { costText, minutesText, openAsTold, scatterSentence } from '../report/whatif-wording.ts';
import { listText } from '../report/wording.ts';
import { asMounted, mountedAnew } from '../whatif/as-mounted.ts';
import type { AssumedBand } from '../whatif/assumed-scatter.ts';
import { figuresOf } from '../whatif/compare.ts';
import { costOf } from '../whatif/costs.ts';
import type { Design } from '../whatif/design.ts';
import { type OrderedSeatings, orderSeatings } from '../whatif/order.ts';
import { plannedOptions } from '../whatif/planned-bench.ts';
import { type Prediction, predict } from '../whatif/predict.ts';
import { type Reach, reachOf } from '../whatif/reach.ts';
import { rehearse } from '../whatif/rehearse.ts';
import { runSheet } from '../whatif/run-sheet.ts';
import { suggestTakes } from '../whatif/suggest.ts';
import { planWithinBudget } from '../whatif/within-budget.ts';
import { EXIT } from './exit-codes.ts';
import { writeNewFiles } from './new-files.ts';
import { nothingApart } from './nothing-apart.ts';
import { openOutputFolder } from './output-folder.ts';
import { installedPackage } from './package-root.ts';
import { type Progress, progressLine } from './progress.ts';
import { ended } from './solve-command.ts';
import { textStyle, writeMessage, writeResult } from './terminal.ts';
import { type WhatifInputs, whatifInputs } from './whatif-designs.ts';
import type { WhatifRequest } from './whatif-options.ts';

/** Says what designs will deliver before anything is mounted; suggests, orders, rehearses, and writes run sheets. */
export async function whatifCommand(request: WhatifRequest): Promise<number> {
  const inputs = request.from === undefined ? [...request.designs] : [request.from];
  const folder =
    request.out === undefined ? undefined : await openOutputFolder(request.out, { replaceResult: false, inputs });
  const progress = progressLine(process.stderr, {
    quiet: request.quiet,
    style: textStyle(process.stderr),
    environment: process.env,
  });
  try {
    const result = await plan(request, await whatifInputs(request, progress), progress);
    const { sheet } = result;
    if (sheet !== undefined) {
      const facts = [
        costText(result.predictions.at(-1)!.cost),
        scatterSentence(result.predictions.at(-1)!.bands.map(({ scatter }) => scatter)),
      ];
      await writeNewFiles([sheetFile(sheet), sheetPage(sheet, facts)]);
    }
    if (folder !== undefined) {
      // Loaded only where a page is wanted: drawing takes packages that planning has no use for.
      const { whatifPage } = await import('../report/page/whatif-page.ts');
      await folder.write([...whatifFiles(result), whatifPage(result)], (name) => progress.step(`writing ${name}`));
    }
    progress.clear();
    await writeResult(answer(result, request));
    return ending(result.predictions);
  } finally {
    progress.clear();
  }
}

async function plan(request: WhatifRequest, inputs: WhatifInputs, progress: Progress): Promise<WhatifResult> {
  const { bands } = inputs;
  const { times, effect, risk } = request;
  // What is added must not change what the design is meant for.
  const model = inputs.designs.length === 1 ? plannedOptions(inputs.designs[0]!, inputs.model) : inputs.model;
  const foresee = (design: Design) => predict(design, bands, { model, times, effect, risk });
  const notices = [...inputs.notices];
  const given = inputs.designs.filter(({ seatings }) => seatings.length > 0);
  const predictions: Prediction[] = [];
  for (const design of given) predictions.push(await foresee(design));
  // The band with the largest uncertainty counts where one has to: all gain most where it is worst.
  const band = bands[predictions.at(-1)?.worstBand ?? 0]!;
  const suggested = suggestedTakes(request, { ...inputs, model }, band, progress, notices);
  const isOrdered =
    suggested !== undefined || request.order || request.sheet !== undefined || request.control !== undefined;
  let design = suggested?.suggestion.design ?? inputs.designs.at(-1)!;
  let ordered: OrderedSeatings | undefined;
  if (isOrdered) {
    ordered = request.fresh ? undefined : orderSeatings(design.seatings, request.seed);
    const made = design.seatings.filter(({ kind }) => kind === 'made');
    const due =
      ordered === undefined
        ? mountedAnew(design.seatings, inputs.lastSeatings)
        : asMounted(ordered.seatings, inputs.lastSeatings);
    design = { ...design, seatings: [...made, ...due] };
  }
  if (suggested !== undefined) predictions.push(await foresee(design));
  else if (isOrdered) predictions.splice(-1, 1, await foresee(design));
  // What was planned and is planned anew within a budget is no design to compare with.
  const shown = request.budget === undefined ? predictions : predictions.slice(-1);
  const { shift } = figuresOf(shown.at(-1)!);
  const rehearsal =
    request.rehearse === undefined
      ? undefined
      : await rehearse(design, bands, {
          runs: request.rehearse,
          seed: request.seed,
          coverage: request.coverage,
          fault: request.fault ?? (Number.isNaN(shift) ? FAULT : Number(shift.toPrecision(2))),
          model,
          risk,
          onProgress: progress.step('rehearsing'),
        });
  const sheet =
    request.sheet === undefined
      ? undefined
      : {
          csv: request.sheet,
          page: request.sheet.replace(/\.csv$/i, '.html'),
          takes: runSheet(design.seatings),
          model: request.model === 'auto' ? undefined : request.model,
          frequencies: request.frequencies,
        };
  if (sheet?.takes.length === 0) throw nothingToCome(request.sheet!);
  return {
    version: installedPackage().version,
    settings: request.typed,
    predictions: shown,
    suggested,
    ordered,
    sheet,
    rehearsal,
    times,
    timesAreAssumed: request.timesAreAssumed,
    effect,
    coverage: request.coverage,
    notices,
  };
}

/** Shift of one take that a rehearsal plants where nothing tells a size, in dB. Common practice, no source. */
const FAULT = 3;

function suggestedTakes(
  request: WhatifRequest,
  { designs, model, lastSeatings }: WhatifInputs,
  band: AssumedBand,
  progress: Progress,
  notices: string[],
): SuggestedTakes | undefined {
  const { add, budget, criterion, again, repeats, seed } = request;
  if (add === undefined && budget === undefined) return undefined;
  const design = designs.at(-1)!;
  const reach = reachOf(design, model);
  const common = { criterion, again, repeats, seed, model, onProgress: progress.step('searching') };
  if (budget === undefined) {
    const suggestion = suggestTakes(design, band, { ...common, add: add! });
    if (suggestion === undefined) throw noPair(design);
    if (reach.unreachable.length > 0) notices.push(unreachableText(design, reach));
    return { suggestion, criterion, budget, isCheapest: false };
  }
  if (reach.unreachable.length > 0) throw unreachableFault(design, reach);
  const { plan, nearest } = planWithinBudget(design, band, {
    ...common,
    minutes: budget,
    times: request.times,
    fewest: reach.fewest,
    fresh: request.fresh,
    from: lastSeatings,
  });
  if (plan !== undefined) return { suggestion: plan.suggestion, criterion, budget, isCheapest: plan.isCheapest };
  const cost = nearest && costOf(nearest.seatings, request.times);
  throw new InputError([
    {
      place: { file: '--budget-minutes' },
      found: `${minutesText(budget)}, in which no design tells the ${design.units.length} units apart`,
      expected: cost === undefined ? 'more time' : `at least ${minutesText(cost.minutes)}: ${costText(cost)}`,
      remedy: `Try --budget-minutes ${Math.ceil(cost?.minutes ?? 2 * budget)}, fewer units, or fewer --repeats.`,
    },
  ]);
}

function noPair(design: Design): InputError {
  return new InputError([
    {
      place: { file: '--add' },
      found: `no pair of ${listText(design.units, 6)} that may be taken`,
      expected: 'at least one pair that is not forbidden',
      remedy: 'Allow a pair, or name more units.',
    },
  ]);
}

function unreachableText(design: Design, { unreachable, releases }: Reach): string {
  const names = listText(unreachable, 6);
  if (design.units.length < 3) return `No take tells two units apart, only their sum: a third unit would.`;
  const cure =
    releases.length > 0
      ? `allow ${releases
          .slice(0, 6)
          .map(([one, other]) => `${one} > ${other}`)
          .join(' or ')}`
      : 'allow more pairs, or name a further unit';
  return `Even with every allowed pair ${names} would have no level: ${cure}.`;
}

function unreachableFault(design: Design, reach: Reach): InputError {
  return new InputError([
    {
      place: { file: design.forbidden.length > 0 ? 'forbidden pairs' : '--units' },
      found: `pairs that cannot tell ${listText(reach.unreachable, 6)} apart, whatever the budget`,
      expected: 'pairs that close an odd loop in every connected part, such as three units against each other',
      remedy: unreachableText(design, reach),
    },
  ]);
}

function nothingToCome(file: string): InputError {
  return new InputError([
    {
      place: { file },
      found: 'a design whose takes are all made',
      expected: 'takes that are still to come',
      remedy: 'Ask for more with --add or --budget-minutes.',
    },
  ]);
}

function answer(result: WhatifResult, request: WhatifRequest): string {
  if (request.json) return jsonText(whatifRecord(result));
  if (request.quiet) return '';
  return ended(whatifText(result, textStyle(process.stdout)));
}

/** Done where at least one design tells a unit from the others. */
function ending(predictions: readonly Prediction[]): number {
  const tells = ({ bands }: Prediction) => bands.some(({ units }) => units.some(({ status }) => status !== 'open'));
  if (predictions.some(tells)) return EXIT.done;
  const last = predictions.at(-1)!;
  const { open, frequencies } = openAsTold(last);
  writeMessage(nothingApart(open, frequencies));
  if (last.bench.design.units.length < 3) {
    writeMessage('The nearest design that works: three units against each other, --units 3 --pattern all.');
  }
  return EXIT.nothingApart;
}
