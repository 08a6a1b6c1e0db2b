import { once } from 'node:events';
import { createReadStream, createWriteStream, statSync } from 'node:fs';
import { mkdir } from 'node:fs/promises';
import { dirname, join } from 'node:path';

/** The built program's library door, typed by the source that it is built from. */
type Library = typeof import('../../src/index.ts');
type Source = Parameters<Library['readFiles']>[0][number];
type Result = Parameters<Library['outputFiles']>[0];

/** What one stage took. */
export interface StageCost {
  readonly stage: string;
  readonly seconds: number;
  /** Highest resident memory of the process so far, in MB: it never falls from one stage to the next. */
  readonly peakMegabytes: number;
}

/** Takes a set through the built library, from its file to all output files, one stage after the other, and reports each. */
export async function runStages(file: string, folder: string, report: (cost: StageCost) => void): Promise<void> {
  const timed = stopwatch(report);
  const library = await timed('start', async () => (await import(builtLibrary())) as Library);
  const readings = await timed('read', () => library.readFiles([sourceOf(file)], {}));
  const set = await timed('gather', () =>
    library.gatherTakes(readings, { grid: { kind: 'as measured' }, band: undefined }),
  );
  const model = await timed('model', () => library.buildModel(set, library.DEFAULT_MODEL_OPTIONS));
  await timed('solve', () => library.solve(set, model));
  const [coverage, risk, tolerance] = [0.95, 0.05, 1];
  const settled = await timed('settle', () => library.settle(set, model, { risk }));
  const examination = await timed('examine', () => library.examine(set, model, settled, { coverage, risk, tolerance }));
  const input = {
    files: readings.files,
    readings: readings.count,
    unused: [...readings.unused, ...set.unused],
    notices: [...readings.notices, ...set.notices],
  };
  const result = {
    version: 'bench',
    settings: {},
    coverage,
    risk,
    tolerance,
    input,
    set,
    model,
    solution: settled.solution,
    examination,
  };
  await timed('write', () => writeOutputs(library, result, folder));
}

function builtLibrary(): string {
  return new URL('../../dist/index.js', import.meta.url).href;
}

function stopwatch(report: (cost: StageCost) => void) {
  return async <T>(stage: string, work: () => T | Promise<T>): Promise<T> => {
    const started = performance.now();
    const value = await work();
    const seconds = (performance.now() - started) / 1000;
    // maxRSS is in kilobytes.
    report({ stage, seconds, peakMegabytes: process.resourceUsage().maxRSS / 1024 });
    return value;
  };
}

function sourceOf(path: string): Source {
  return {
    name: path,
    bytes: statSync(path).size,
    open: () => createReadStream(path),
    sibling: (relative) => sourceOf(join(dirname(path), relative)),
  };
}

async function writeOutputs(library: Library, result: Result, folder: string): Promise<void> {
  for (const file of library.outputFiles(result)) {
    const path = join(folder, file.name);
    await mkdir(dirname(path), { recursive: true });
    const stream = createWriteStream(path);
    for (const chunk of file.chunks()) {
      if (!stream.write(chunk)) await once(stream, 'drain');
    }
    stream.end();
    await once(stream, 'finish');
  }
}
