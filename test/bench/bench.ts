import { spawn } from 'node:child_process';
import { mkdtemp, rm, stat } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { writeBenchSet } from './make-set.ts';
import { runStages, type StageCost } from './stages.ts';

/*
 * What a large set costs: `npm run bench` for 40 units, all pairs twice, 1,000 frequencies; `npm run bench -- 1 2 4` for
 * one, two and four thousand frequencies. Each measured run is a process of its own, so that one run's memory does not
 * count in the next.
 */

const PROGRAM = fileURLToPath(new URL('../../bin/oddloop.js', import.meta.url));
const THIS = fileURLToPath(import.meta.url);
/** First argument of the processes that this one starts. */
const MAKE = '--make';
const STAGES = '--stages';

async function bench(scales: readonly number[]): Promise<void> {
  const folder = await mkdtemp(join(tmpdir(), 'oddloop-bench-'));
  try {
    for (const scale of scales) await benchScale(scale, folder);
    const demo = await wallSeconds(process.execPath, [PROGRAM, 'demo', join(folder, 'demo')]);
    print(`demo run: ${demo.toFixed(2)} s`);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

async function benchScale(scale: number, folder: string): Promise<void> {
  const file = join(folder, `set-${scale}.csv`);
  // Made in a process of its own too: a child starts with its parent's peak on record.
  await wallSeconds(process.execPath, [...process.execArgv, THIS, MAKE, file, String(scale)]);
  const megabytes = (await stat(file)).size / 1e6;
  print(`scale ${scale}, ${megabytes.toFixed(0)} MB`);
  await wallSeconds(process.execPath, [...process.execArgv, THIS, STAGES, file, join(folder, 'stages')]);
  const out = join(folder, 'solved');
  const whole = await wallSeconds(process.execPath, [PROGRAM, 'solve', file, '--out', out, '--quiet']);
  print(`  solve by the program, wall  ${whole.toFixed(2)} s`);
  for (const done of [file, out, join(folder, 'stages')]) await rm(done, { recursive: true, force: true });
}

/** Runs a process to its end and gives its wall time; its text on stderr and, for our own, on stdout is passed on. */
function wallSeconds(command: string, args: readonly string[]): Promise<number> {
  const started = performance.now();
  const ours = args.includes(THIS);
  return new Promise((resolve, reject) => {
    const child = spawn(command, args, { stdio: ['ignore', ours ? 'inherit' : 'ignore', 'inherit'] });
    child.on('error', reject);
    child.on('exit', (code, signal) => {
      if (code === 0) resolve((performance.now() - started) / 1000);
      else reject(new Error(`${[command, ...args].join(' ')} ended with ${code ?? signal}`));
    });
  });
}

async function printStages(file: string, folder: string): Promise<void> {
  let total = 0;
  await runStages(file, folder, ({ stage, seconds, peakMegabytes }: StageCost) => {
    total += seconds;
    print(
      `  ${stage.padEnd(8)} ${seconds.toFixed(2).padStart(8)} s   peak so far ${peakMegabytes.toFixed(0).padStart(6)} MB`,
    );
  });
  print(`  ${'total'.padEnd(8)} ${total.toFixed(2).padStart(8)} s`);
}

function print(line: string): void {
  process.stdout.write(`${line}\n`);
}

function scalesOf(args: readonly string[]): number[] {
  const scales = args.map(Number);
  const wrong = args.filter((_, i) => !(scales[i]! > 0));
  if (wrong.length > 0) throw new RangeError(`a scale is a number above 0, not ${wrong.join(' ')}`);
  return scales.length > 0 ? scales : [1];
}

const [first, ...rest] = process.argv.slice(2);
if (first === MAKE) await writeBenchSet(rest[0]!, { scale: Number(rest[1]) });
else if (first === STAGES) await printStages(rest[0]!, rest[1]!);
else await bench(scalesOf(first === undefined ? [] : [first, ...rest]));
