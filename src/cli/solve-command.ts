import { uncertaintyBudget } from '../estimate/budget.ts';
import type { MonteCarlo } from '../estimate/monte-carlo.ts';
import { examine } from '../findings/examine.ts';
import { testLookalikes } from '../findings/lookalike-test.ts';
import { type Settled, settle } from '../findings/settle.ts';
import { buildModel } from '../model/build-model.ts';
import type { Model } from '../model/model.ts';
import { type SystematicEffect, systematicEffects } from '../model/systematic-effects.ts';
import type { Readings } from '../readings/readings.ts';
import { jsonText } from '../report/json-text.ts';
import { outputFiles } from '../report/output-files.ts';
import type { Result } from '../report/result.ts';
import { summaryRecord } from '../report/summary-json.ts';
import { terminalSummary } from '../report/terminal-summary.ts';
import { gatherTakes } from '../takes/gather-takes.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { EXIT } from './exit-codes.ts';
import {
  changedFiles,
  gatherOptions,
  inputSummary,
  namedFiles,
  readMeasurements,
  readModelInputs,
  refuseChangedFiles,
  settingsOf,
} from './inputs.ts';
import { nothingApart } from './nothing-apart.ts';
import type { Request } from './options.ts';
import { openOutputFolder } from './output-folder.ts';
import { installedPackage, pageScript } from './package-root.ts';
import { type Progress, progressLine } from './progress.ts';
import type { Settings } from './settings.ts';
import { textStyle, writeMessage, writeResult } from './terminal.ts';

export interface SolveRun {
  /** Whether an input file that is not what it was in the run that is repeated stops the run; a message only where absent. */
  readonly mustBeUnchanged?: boolean;
}

/** The main job: reads the files, solves, writes all outputs to `folderName` and the summary to stdout. */
export async function solveCommand(request: Request, folderName: string, run: SolveRun = {}): Promise<number> {
  const { settings, earlier } = await settingsOf(request);
  const folder = await openOutputFolder(folderName, { replaceResult: true, inputs: namedFiles(settings) });
  const progress = progressLine(process.stderr, {
    quiet: request.quiet,
    style: textStyle(process.stderr),
    environment: process.env,
  });
  try {
    const readings = await readMeasurements(settings, progress);
    const set = gatherTakes(readings, gatherOptions(settings));
    const modelInputs = await readModelInputs(settings);
    const input = inputSummary(readings, set, modelInputs);
    if (run.mustBeUnchanged) refuseChangedFiles(input, earlier);
    const model = buildModel(set, modelInputs.options);
    const effects = systematicEffects(set, modelInputs.budget);
    const onProgress = progress.step('solving');
    const how = { givenUncertainty: settings.u ?? undefined, risk: settings.risk, effects, onProgress };
    const settled = await settle(set, model, how);
    const declared = await testLookalikes(set, modelInputs.options, model.choice.kind, {
      ...how,
      coverage: settings.coverage,
    });
    const examination = examine(set, model, settled, { ...settings, declared });
    const checked = await checkedByDraws(settings, readings, set, model, settled, effects, progress);
    const result: Result = {
      version: installedPackage().version,
      settings: { ...settings },
      coverage: settings.coverage,
      risk: settings.risk,
      tolerance: settings.tolerance,
      input,
      set,
      model,
      solution: settled.solution,
      budget: uncertaintyBudget(set, model, settled.solution),
      monteCarlo: checked,
      examination,
    };
    // Loaded only now: drawing takes packages that reading and solving have no use for.
    const { pageFiles } = await import('../report/page/page-files.ts');
    const files = [...outputFiles(result), ...pageFiles(result, await pageScript())];
    await folder.write(files, (name) => progress.step(`writing ${name}`));
    progress.clear();
    for (const sentence of changedFiles(result.input, earlier)) writeMessage(sentence);
    await writeResult(answer(result, request, folderName));
    return ending(result, request.strict);
  } finally {
    progress.clear();
  }
}

/** The Monte Carlo check, where it is asked for. */
async function checkedByDraws(
  settings: Settings,
  readings: Readings,
  set: TakeSet,
  model: Model,
  { solution, leftOut }: Settled,
  effects: readonly SystematicEffect[],
  progress: Progress,
): Promise<MonteCarlo | undefined> {
  const draws = settings['monte-carlo'];
  if (draws === null) return undefined;
  const { monteCarlo } = await import('../estimate/monte-carlo.ts');
  const { levelDraws } = await import('../takes/drawn-levels.ts');
  const width = set.frequencies.length;
  const levels = set.levels.map((level, cell) => (leftOut.has(Math.floor(cell / width)) ? Number.NaN : level));
  const { seed, coverage } = settings;
  const drawn = levelDraws(readings, gatherOptions(settings), set);
  const onProgress = progress.step('Monte Carlo check');
  return monteCarlo({ ...set, levels }, model, solution, { draws, seed, coverage, levels: drawn, effects, onProgress });
}

function answer(result: Result, request: Request, folder: string): string {
  if (request.json) return jsonText(summaryRecord(result));
  if (request.quiet) return '';
  return ended(terminalSummary(result, { folder, style: textStyle(process.stdout) }));
}

function ending({ examination, set }: Result, strict: boolean): number {
  if (examination.units.some(({ counts }) => counts.ok + counts.datum > 0)) {
    return strict && isSomethingFlagged(examination) ? EXIT.flagged : EXIT.done;
  }
  writeMessage(nothingApart(examination.open, set.frequencies));
  return EXIT.nothingApart;
}

/** A take that disagrees, a tie, or a unit that does not hold. */
function isSomethingFlagged({ takes, holds, changed, whole }: Result['examination']): boolean {
  return (
    whole.isModelFailing ||
    changed.length > 0 ||
    takes.some(({ verdict }) => verdict === 'flagged' || verdict === 'tied') ||
    holds.some(({ verdict }) => verdict === 'broken')
  );
}

/** The text with one line feed at its end. */
export function ended(text: string): string {
  return text.endsWith('\n') ? text : `${text}\n`;
}
