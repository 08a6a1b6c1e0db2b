/** Whatever stands in the cells: the program ends in words, never with a stack or as a defect of its own. */
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { LINK_STATUS, type Solution } from '../../src/estimate/solution.ts';
import { solve } from '../../src/estimate/solve.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { InputError } from '../../src/quantity/input-fault.ts';
import { readFiles } from '../../src/readings/read-files.ts';
import { readPathLevels } from '../../src/readings/read-path-levels.ts';
import { readReferences } from '../../src/readings/read-references.ts';
import { gatherTakes } from '../../src/takes/gather-takes.ts';
import { STACK } from '../anomalies/stack.ts';
import { solveFiles } from '../command/solve-folder.ts';
import { memorySource } from '../readings/memory-source.ts';

/** Most cells are sound, so that something is left to be solved; the rest is what files hold when something went wrong. */
const SOUND = 30;

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
  ),
  fc.double().map(String),
  fc.string({ maxLength: 6 }),
);
const mixed = (sound: fc.Arbitrary<string>) =>
  fc.oneof({ weight: SOUND, arbitrary: sound }, { weight: 1, arbitrary: hostile });
const tenths = (min: number, max: number) => fc.integer({ min, max }).map((value) => `${value / 10}`);

const label = (...sound: readonly string[]) => mixed(fc.constantFrom(...sound));

const unit = label('A', 'B', 'C', 'D');
const frequency = mixed(fc.constantFrom('1000', '1250', '2000', '8000'));
const level = mixed(tenths(-600, 600));
const uncertainty = mixed(tenths(1, 20));

/** Optional columns of the long layout. */
const OPTIONAL: Readonly<Record<string, fc.Arbitrary<string>>> = {
  u_db: fc.oneof(uncertainty, fc.constantFrom('0.000001', '1000', '1e-3')),
  session: label('s1', 's2'),
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

/** Tables with these columns; no two rows agree in the first `key` of them. */
const table = (columns: Readonly<Record<string, fc.Arbitrary<string>>>, key: number, maxLength: number) =>
  fc
    .uniqueArray(fc.tuple(...Object.values(columns)), {
      minLength: 1,
      maxLength,
      // A frequency twice in a take stops the run, and would leave little to be solved.
      selector: (cells) => JSON.stringify(cells.slice(0, key)),
    })
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
        path: label('p', 'p', 'q'),
        [size]: size === 'ratio' ? mixed(fc.constantFrom('0.5', '2', '1e-3')) : level,
        ...Object.fromEntries(optional.map((name) => [name, OPTIONAL[name]!])),
      },
      3,
      40,
    ),
  );
const wide = table({ frequency_hz: frequency, 'A>B': level, 'B>C': level, 'C>A': level, 'A>B#2': level }, 1, 8);
const refs = table({ unit, frequency_hz: frequency, level_db: level, u_db: uncertainty }, 2, 2);
const paths = table({ path: fc.constant('p'), frequency_hz: frequency, level_db: level, u_db: uncertainty }, 2, 2);

/** Most sets do without tables of known values: one bad row in such a table refuses the run. */
const seldom = <Value>(value: fc.Arbitrary<Value>) =>
  fc.oneof({ weight: 3, arbitrary: fc.constant(undefined) }, { weight: 1, arbitrary: value });

const bench = fc.record({
  pairs: fc.oneof({ weight: 4, arbitrary: long }, { weight: 1, arbitrary: wide }),
  refs: seldom(refs),
  paths: seldom(paths),
  model: fc.constantFrom('reciprocal' as const, 'directional' as const, 'auto' as const),
  looseGain: fc.boolean(),
  u: fc.constantFrom(undefined, 1e-6, 0.3, 1000),
});
type Bench = typeof bench extends fc.Arbitrary<infer Value> ? Value : never;

/** The steps of `solve` in this process, up to the solution: fast enough for many tables. Undefined where it is refused in words. */
async function solved(input: Bench): Promise<Solution | undefined> {
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
    return await solve(set, buildModel(set, options), { givenUncertainty: input.u });
  } catch (error) {
    if (error instanceof InputError && error.message !== '') return undefined;
    throw error;
  }
}

test('any tables made of random cells give a finite level wherever a link is told apart, or are refused in words', async () => {
  await fc.assert(
    fc.asyncProperty(bench, async (input) => {
      const solution = await solved(input);
      solution?.estimates.forEach((level, at) => {
        if (solution.status[at] === LINK_STATUS.indexOf('open')) expect(level).toBeNaN();
        else expect(Number.isFinite(level)).toBe(true);
      });
    }),
    { seed: 20261201, numRuns: 300 },
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
