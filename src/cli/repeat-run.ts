import { join } from 'node:path';
import type { LadderStep } from '../estimate/scatter-step.ts';
import type { Examination } from '../findings/examination.ts';
import { examine } from '../findings/examine.ts';
import { settle } from '../findings/settle.ts';
import { buildModel } from '../model/build-model.ts';
import type { ModelOptions } from '../model/model-options.ts';
import { type FrequencyRange, frequencyText } from '../quantity/frequency.ts';
import { InputError } from '../quantity/input-fault.ts';
import { gatherTakes } from '../takes/gather-takes.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { type AssumedBand, type StepFigure, shownBands } from '../whatif/assumed-scatter.ts';
import { changedFiles, gatherOptions, inputSummary, readMeasurements, readModelInputs, settingsOf } from './inputs.ts';
import type { Progress } from './progress.ts';
import type { Settings } from './settings.ts';

/** An earlier run, made again from the settings of its `summary.json`. */
export interface RepeatedRun {
  readonly settings: Settings;
  readonly set: TakeSet;
  /** As the run had them, the model as it was chosen. */
  readonly model: ModelOptions;
  readonly examination: Examination;
  /** Takes that the solution left out. */
  readonly leftOut: ReadonlySet<number>;
  /** Files that are no longer what they were; one sentence each. */
  readonly notices: readonly string[];
}

/**
 * Repeats a run.
 * @param name the folder of its result, or its summary.json.
 * @throws InputError where the folder holds no run, or its files are gone.
 */
export async function repeatRun(name: string, progress: Progress): Promise<RepeatedRun> {
  const settingsFile = name.endsWith('.json') ? name : join(name, 'summary.json');
  const { settings, earlier } = await settingsOf({
    given: {},
    settingsFile,
    out: undefined,
    json: false,
    strict: false,
    quiet: true,
  });
  const readings = await readMeasurements(settings, progress);
  const set = gatherTakes(readings, gatherOptions(settings));
  const modelInputs = await readModelInputs(settings);
  const model = buildModel(set, modelInputs.options);
  const settled = await settle(set, model, {
    givenUncertainty: settings.u ?? undefined,
    risk: settings.risk,
    onProgress: progress.step('solving the run again'),
  });
  return {
    settings,
    set,
    model: { ...modelInputs.options, model: model.choice.kind },
    examination: examine(set, model, settled, settings),
    leftOut: settled.leftOut,
    notices: [
      ...changedFiles(inputSummary(readings, set, modelInputs), earlier),
      ...(settings['loose-gain']
        ? ['Session gains count as known here: the figures are smaller than those of a run with loose gains.']
        : []),
    ],
  };
}

/**
 * The scatter that a run showed, with what the user gives in its place.
 * @throws InputError where the run has no band in the range.
 */
export function runBands(
  { examination }: Pick<RepeatedRun, 'examination'>,
  given: Partial<Record<LadderStep, StepFigure>>,
  within: FrequencyRange | undefined,
): readonly AssumedBand[] {
  const bands = shownBands(examination.scatter, given, within);
  if (bands.length > 0) return bands;
  const [first, last] = [examination.scatter[0]!, examination.scatter.at(-1)!];
  throw new InputError([
    {
      place: { file: '--band' },
      found: 'a range that holds no third-octave of the run',
      expected: `a range within ${frequencyText(first.from, 3)} to ${frequencyText(last.to, 3)}`,
      remedy: 'Choose a wider range.',
    },
  ]);
}
