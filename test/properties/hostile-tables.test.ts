/** Whatever stands in the cells: the program ends in words, never with a stack or as a defect of its own. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { examine } from '../../src/findings/examine.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { InputError } from '../../src/quantity/input-fault.ts';
import { readFiles } from '../../src/readings/read-files.ts';
import { readPathLevels } from '../../src/readings/read-path-levels.ts';
import { readReferences } from '../../src/readings/read-references.ts';
import { outputFiles } from '../../src/report/output-files.ts';
import { PLAIN_STYLE } from '../../src/report/result.ts';
import { terminalSummary } from '../../src/report/terminal-summary.ts';
import { gatherTakes } from '../../src/takes/gather-takes.ts';
import { STACK } from '../anomalies/stack.ts';
import { solveFiles } from '../command/solve-folder.ts';
import { memorySource } from '../readings/memory-source.ts';

/** Most cells are sound, so that something is left to be solved; the rest is what files hold when something went wrong. */
const SOUND = 30;

const NO_NUMBER = /NaN|Infinity/;

const hostile = fc.oneof(
  fc.constantFrom(
    '',
    ' ',
    '0',
    '-0',
    '1e300',
    '-1e300',
    '1e-300',
    '5e-324',
    '1.7976931348623157e308',
    '1e999',
    'NaN',
    'inf',
    '0x10',
    '1,000',
    '-41,5',
    '1.000.000',
    '999.9',
    '-1000',
    '0.000001',
    '1e15',
    '1e-6',
    '1e-7',
    'A',
    '#',
    '>',
    'undefined',
    '__proto__',
    '\u221212',
    '"',
    '\0',
  ),
  fc.double().map(String),
  fc.string({ maxLength: 6 }),
);
const mixed = (sound: fc.Arbitrary<string>) =>
  fc.oneof({ weight: SOUND, arbitrary: sound }, { weight: 1, arbitrary: hostile });
const tenths = (min: number, max: number) => fc.integer({ min, max }).map((value) => `${value / 10}`);

/** Names go into the outputs as they are: those that look like a missing number would hide one. */
const label = (...sound: readonly string[]) => mixed(fc.constantFrom(...sound)).filter((text) => !NO_NUMBER.test(text));

const unit = label('A', 'B', 'C', 'D');
const frequency = mixed(fc.constantFrom('1000', '1250', '2000', '8000'));
const level = mixed(tenths(-600, 600));
const uncertainty = mixed(tenths(1, 20));

/** Optional columns of the long layout. */
const OPTIONAL: Readonly<Record<string, fc.Arbitrary<string>>> = {
  u_db: fc.oneof(uncertainty, fc.constantFrom('0.000001', '1000', '1e-3')),
  session: label('s1', 's2'),
  path: label('p', 'q'),
  emitter_mount: label('bare', 'clamped'),
  emitter_seating: label('1', '2'),
  repeat: label('1', '2'),
  averages: mixed(fc.constantFrom('10', '100')),
  coherence: mixed(fc.constantFrom('0.9', '1')),
  noise_db: level,
  gain_db: mixed(fc.constantFrom('0', '20')),
  distance_m: mixed(fc.constantFrom('0.1', '2')),
  taken_at: mixed(fc.constantFrom('2026-05-04', '2026-05-04T10:30')),
};

const quoted = (text: string) => (/[",\n\r]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text);
const csv = (header: readonly string[], rows: readonly (readonly string[])[]) =>
  `${[header, ...rows].map((row) => row.map(quoted).join(',')).join('\n')}\n`;

/** A table with these columns, or now and then with bare cells of text where numbers are due. */
const table = (columns: Readonly<Record<string, fc.Arbitrary<string>>>, maxLength: number) =>
  fc
    .array(fc.tuple(...Object.values(columns)), { minLength: 1, maxLength })
    .map((rows) => csv(Object.keys(columns), rows));

const long = fc
  .record({
    optional: fc.subarray(Object.keys(OPTIONAL)),
    size: fc.constantFrom('level_db', 'ratio'),
  })
  .chain(({ optional, size }) =>
    table(
      {
        emitter: unit,
        receiver: unit,
        frequency_hz: frequency,
        [size]: size === 'ratio' ? mixed(fc.constantFrom('0.5', '2', '1e-3')) : level,
        ...Object.fromEntries(optional.map((name) => [name, OPTIONAL[name]!])),
      },
      40,
    ),
  );
const wide = table({ frequency_hz: frequency, 'A>B': level, 'B>C': level, 'C>A': level, 'A>B#2': level }, 8);
const refs = table({ unit, frequency_hz: frequency, level_db: level, u_db: uncertainty }, 2);
const paths = table({ path: fc.constant('p'), frequency_hz: frequency, level_db: level, u_db: uncertainty }, 2);

const bench = fc.record(
  {
    pairs: fc.oneof({ weight: 4, arbitrary: long }, { weight: 1, arbitrary: wide }),
    refs,
    paths,
    model: fc.constantFrom('reciprocal', 'directional', 'auto' as const),
    looseGain: fc.boolean(),
    u: fc.constantFrom(1e-6, 0.3, 1000),
  },
  { requiredKeys: ['pairs', 'model', 'looseGain'] },
);
type Bench = typeof bench extends fc.Arbitrary<infer Value> ? Value : never;

/** The steps of `solve` in this process: fast enough for many tables. Undefined where it is refused in words. */
async function solved(input: Bench): Promise<string | undefined> {
  try {
    const readings = await readFiles([memorySource('pairs.csv', input.pairs)]);
    const set = gatherTakes(readings, { grid: { kind: 'as measured' }, band: undefined });
    const options: ModelOptions = {
      ...DEFAULT_MODEL_OPTIONS,
      model: input.model,
      looseGain: input.looseGain,
      references:
        input.refs === undefined ? [] : (await readReferences(memorySource('refs.csv', input.refs))).references,
      path: input.paths === undefined ? 'free' : (await readPathLevels(memorySource('paths.csv', input.paths))).levels,
    };
    const model = buildModel(set, options);
    const choices = { coverage: 0.95, risk: 0.05, tolerance: 1 };
    const settled = await settle(set, model, { givenUncertainty: input.u, risk: choices.risk });
    const result = {
      version: '0',
      settings: {},
      ...choices,
      input: { files: readings.files, readings: readings.count, unused: readings.unused, notices: readings.notices },
      set,
      model,
      solution: settled.solution,
      examination: examine(set, model, settled, choices),
    };
    // What cannot be used is written as it stood.
    const files = outputFiles(result).filter(({ name }) => name !== 'unused.csv');
    const texts = files.flatMap((file) => [...file.chunks()]);
    return [...texts, terminalSummary(result, { folder: 'out', style: PLAIN_STYLE })].join('');
  } catch (error) {
    if (error instanceof InputError && error.message !== '') return undefined;
    throw error;
  }
}

test('any table made of random cells is solved, or refused in words', async () => {
  await fc.assert(
    fc.asyncProperty(bench, async (input) => {
      expect(process.env.NANS ? (await solved(input)) ?? '' : (await solved(input), '')).not.toMatch(NO_NUMBER);
    }),
    { seed: 20261201, numRuns: Number(process.env.FUZZ ?? 150) },
  );
});

test('any table given to the program ends without a stack, and not as a defect', async () => {
  await fc.assert(
    fc.asyncProperty(long, async (pairs) => {
      const { code, stderr } = await solveFiles({ 'pairs.csv': pairs }, ['pairs.csv']);
      expect([0, 3, 4]).toContain(code);
      expect(stderr).not.toMatch(STACK);
    }),
    { seed: 20261202, numRuns: 15 },
  );
});
