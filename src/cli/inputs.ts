import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../model/model-options.ts';
import { parseRange } from '../quantity/frequency.ts';
import { InputError } from '../quantity/input-fault.ts';
import type { BudgetLine } from '../readings/budget-lines.ts';
import { readBudget } from '../readings/read-budget.ts';
import { readFiles } from '../readings/read-files.ts';
import { readPathLevels } from '../readings/read-path-levels.ts';
import { readReferences } from '../readings/read-references.ts';
import type { InputFile, Readings } from '../readings/readings.ts';
import type { InputSummary } from '../report/result.ts';
import type { GatherOptions } from '../takes/gather-takes.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { fileSource } from './file-source.ts';
import { parseGrid } from './grid-text.ts';
import type { Request } from './options.ts';
import type { Progress } from './progress.ts';
import { DEFAULT_SETTINGS, type Settings } from './settings.ts';
import { type EarlierRun, readSettingsFile } from './settings-file.ts';

/** Everything that shapes the run: defaults, then the settings file, then the command line. */
export async function settingsOf(
  request: Request,
): Promise<{ readonly settings: Settings; readonly earlier: EarlierRun | undefined }> {
  const earlier = request.settingsFile === undefined ? undefined : await readSettingsFile(request.settingsFile);
  const settings: Settings = { ...DEFAULT_SETTINGS, ...earlier?.settings, ...request.given };
  if (settings.files.length > 0) return { settings, earlier };
  throw new InputError([
    {
      place: { file: request.settingsFile ?? 'settings', column: 'files' },
      found: 'no input file',
      expected: 'at least one, here or on the command line',
      remedy: 'Name the files on the command line.',
    },
  ]);
}

/** Names of all files that the settings say are to be read. */
export function namedFiles(settings: Settings): string[] {
  const { files, refs, path, budget } = settings;
  const tables = [refs, pathWord(path) === undefined ? path : null, budget];
  return [...files, ...tables.filter((table) => table !== null)];
}

/** Reads the measurement files. */
export async function readMeasurements(settings: Settings, progress: Progress): Promise<Readings> {
  const onProgress = progress.step('reading');
  const sources = await allOrFaults(settings.files.map((file) => fileSource(file)));
  return readFiles(sources, settings.level === null ? { onProgress } : { onProgress, levelFormula: settings.level });
}

// The faults of all files are told at once.
async function allOrFaults<Work extends readonly unknown[]>(
  work: Work,
): Promise<{ -readonly [Item in keyof Work]: Awaited<Work[Item]> }> {
  const outcomes = await Promise.allSettled(work);
  const failures = outcomes.filter((outcome) => outcome.status === 'rejected').map(({ reason }): unknown => reason);
  const defect = failures.find((reason) => !(reason instanceof InputError));
  if (defect !== undefined) throw defect;
  if (failures.length > 0) throw new InputError(failures.flatMap((reason) => (reason as InputError).faults));
  return Promise.all(work) as Promise<{ -readonly [Item in keyof Work]: Awaited<Work[Item]> }>;
}

export function gatherOptions(settings: Settings): GatherOptions {
  const grid = parseGrid(settings.grid);
  if (grid === undefined) throw new Error(`the grid ${settings.grid} was accepted but cannot be read`);
  return { grid, band: settings.band === null ? undefined : parseRange(settings.band) };
}

/** What the user decides about the model, with what was read for it. */
export interface ModelInputs {
  readonly options: ModelOptions;
  /** Systematic effects. */
  readonly budget: readonly BudgetLine[];
  /** Tables of certificates, path levels and systematic effects. */
  readonly files: readonly InputFile[];
  readonly notices: readonly string[];
}

/** Reads certificates, path levels and systematic effects from their files; faults of all are told together. */
export async function readModelInputs(settings: Settings): Promise<ModelInputs> {
  const { model, datum, reversible, lookalikes, refs, path, budget } = settings;
  const word = pathWord(path);
  const [certificates, levels, effects] = await allOrFaults([
    refs === null ? undefined : fileSource(refs).then(readReferences),
    word === undefined ? fileSource(path).then(readPathLevels) : undefined,
    budget === null ? undefined : fileSource(budget).then(readBudget),
  ]);
  const tables = [certificates, levels, effects].filter((table) => table !== undefined);
  return {
    options: {
      ...DEFAULT_MODEL_OPTIONS,
      model,
      datum,
      reversible,
      lookalikes,
      looseGain: settings['loose-gain'],
      references: certificates?.references ?? [],
      path: word ?? levels?.levels ?? [],
    },
    budget: effects?.lines ?? [],
    files: tables.map(({ file }) => file),
    notices: tables.flatMap(({ notices }) => notices),
  };
}

function pathWord(path: string): 'free' | 'none' | undefined {
  return path === 'free' || path === 'none' ? path : undefined;
}

/** What reading and gathering gave, for the outputs. */
export function inputSummary(readings: Readings, set: TakeSet, modelInputs: ModelInputs): InputSummary {
  return {
    files: [...readings.files, ...modelInputs.files],
    readings: readings.count,
    unused: [...readings.unused, ...set.unused],
    notices: [...readings.notices, ...modelInputs.notices, ...set.notices],
  };
}

/** @throws InputError with each input file that is no longer what it was in the run that is repeated. */
export function refuseChangedFiles({ files }: Pick<InputSummary, 'files'>, earlier: EarlierRun | undefined): void {
  const changed = files.filter(({ name, sha256 }) => (earlier?.sha256.get(name) ?? sha256) !== sha256);
  if (changed.length === 0) return;
  throw new InputError(
    changed.map(({ name }) => ({
      place: { file: name },
      found: 'a file that has changed since the result was made (its SHA-256 differs)',
      expected: 'the file that the result was made from',
      remedy: 'Put that file back, or solve the new one: oddloop solve --settings RESULT/summary.json --out NEW',
    })),
  );
}

/** One sentence for each input file that is no longer what it was in the run that is repeated. */
export function changedFiles({ files }: Pick<InputSummary, 'files'>, earlier: EarlierRun | undefined): string[] {
  return files
    .filter(({ name, sha256 }) => (earlier?.sha256.get(name) ?? sha256) !== sha256)
    .map(({ name }) => `${name} is not what it was in the run that is repeated: its SHA-256 differs.`);
}
