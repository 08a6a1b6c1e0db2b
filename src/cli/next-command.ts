import type { FrequencyRange } from '../quantity/frequency.ts';
import { jsonText } from '../report/json-text.ts';
import { type NextResult, nextRecord, nextText } from '../report/whatif-next.ts';
import { DEFAULT_TIMES } from '../whatif/costs.ts';
import { designOfRun } from '../whatif/design-of-run.ts';
import { nextTakes } from '../whatif/next-takes.ts';
import { EXIT } from './exit-codes.ts';
import { installedPackage } from './package-root.ts';
import { progressLine } from './progress.ts';
import { repeatRun, runBands } from './repeat-run.ts';
import { ended } from './solve-command.ts';
import { textStyle, writeResult } from './terminal.ts';
import { UsageError } from './usage-error.ts';
import { bandOf, type Say } from './whatif-values.ts';

export interface NextRequest {
  /** Folder of the run. */
  readonly run: string;
  /** Expanded uncertainty in dB that the worst unit is to have. */
  readonly target: number | undefined;
  /** Takes that may be added for it. */
  readonly most: number;
  /** Bands that count; absent for all. */
  readonly band: FrequencyRange | undefined;
  readonly json: boolean;
  readonly quiet: boolean;
}

const MOST_TAKES = 20;

/** @throws UsageError with everything that cannot be understood. */
export function readNextRequest(run: string, values: Readonly<Record<string, unknown>>): NextRequest {
  const said: string[] = [];
  const say: Say = (name, found, expected, example) =>
    said.push(`--${name}: found ${JSON.stringify(found)}; expected ${expected}. Example: --${name} ${example}`);
  const number = (name: string, key: string, isFit: (value: number) => boolean, expected: string, example: string) => {
    const typed = values[key];
    if (typed === undefined) return undefined;
    const value = typeof typed === 'string' && /^(\d+\.?\d*|\.\d+)$/.test(typed.trim()) ? Number(typed) : Number.NaN;
    if (isFit(value)) return value;
    say(name, typed, expected, example);
    return undefined;
  };
  if (run.trim() === '') said.push(`RESULT: found ${JSON.stringify(run)}; expected the folder of a result.`);
  const target = number('target-db', 'targetDb', (value) => value > 0, 'an expanded uncertainty in dB, above 0', '0.5');
  const isCount = (value: number) => Number.isInteger(value) && value >= 1 && value <= 400;
  const most = number('most', 'most', isCount, 'a whole number from 1 to 400', '10') ?? MOST_TAKES;
  const band = bandOf(values.band, say);
  if (said.length > 0) throw new UsageError(said);
  return { run, target, most, band, json: values.json === true, quiet: values.quiet === true };
}

/** After a run: the takes most worth adding, and what each buys. Writes nothing. */
export async function nextCommand({ run, target, most, band, json, quiet }: NextRequest): Promise<number> {
  const progress = progressLine(process.stderr, {
    quiet,
    style: textStyle(process.stderr),
    environment: process.env,
  });
  try {
    const repeated = await repeatRun(run, progress);
    const { set, examination, settings, model, leftOut, notices } = repeated;
    const plan = await nextTakes(designOfRun(run, set, leftOut), set, examination, runBands(repeated, {}, band), {
      model,
      times: DEFAULT_TIMES,
      coverage: settings.coverage,
      target,
      most,
      seed: 1,
      onProgress: progress.step('looking for takes'),
    });
    progress.clear();
    const result: NextResult = { version: installedPackage().version, run, coverage: settings.coverage, plan, notices };
    const text = () => (quiet ? '' : ended(nextText(result, textStyle(process.stdout))));
    await writeResult(json ? jsonText(nextRecord(result)) : text());
    return EXIT.done;
  } finally {
    progress.clear();
  }
}
