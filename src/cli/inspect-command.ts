import { openFindings } from '../findings/open-findings.ts';
import { buildModel } from '../model/build-model.ts';
import { findPatterns } from '../model/find-patterns.ts';
import { systematicEffects } from '../model/systematic-effects.ts';
import { inspectRecord } from '../report/inspect-json.ts';
import { inspectText } from '../report/inspect-text.ts';
import { jsonText } from '../report/json-text.ts';
import type { Inspection } from '../report/result.ts';
import { gatherTakes } from '../takes/gather-takes.ts';
import { EXIT } from './exit-codes.ts';
import { changedFiles, gatherOptions, inputSummary, readMeasurements, readModelInputs, settingsOf } from './inputs.ts';
import { nothingApart } from './nothing-apart.ts';
import type { Request } from './options.ts';
import { installedPackage } from './package-root.ts';
import { progressLine } from './progress.ts';
import { ended } from './solve-command.ts';
import { textStyle, writeMessage, writeResult } from './terminal.ts';

/** Says what the files hold, what is wrong with them, and what can be told apart. Writes no file. */
export async function inspectCommand(request: Request): Promise<number> {
  const { settings, earlier } = await settingsOf(request);
  const progress = progressLine(process.stderr, {
    quiet: request.quiet,
    style: textStyle(process.stderr),
    environment: process.env,
  });
  try {
    const readings = await readMeasurements(settings, progress);
    const set = gatherTakes(readings, gatherOptions(settings));
    const modelInputs = await readModelInputs(settings);
    systematicEffects(set, modelInputs.budget);
    const model = buildModel(set, modelInputs.options);
    const patterns = findPatterns(set, model);
    const inspection: Inspection = {
      version: installedPackage().version,
      input: inputSummary(readings, set, modelInputs),
      set,
      model,
      patterns,
      open: openFindings(set, model, patterns),
    };
    progress.clear();
    for (const sentence of changedFiles(inspection.input, earlier)) writeMessage(sentence);
    await writeResult(
      request.json ? jsonText(inspectRecord(inspection)) : ended(inspectText(inspection, textStyle(process.stdout))),
    );
    return ending(inspection);
  } finally {
    progress.clear();
  }
}

function ending({ model, patterns, open, set }: Inspection): number {
  const isKnown = patterns.patterns.some(({ separability }) =>
    model.responses.some(({ link }) => separability.status[link] !== 'open'),
  );
  if (isKnown) return EXIT.done;
  writeMessage(nothingApart(open, set.frequencies));
  return EXIT.nothingApart;
}
