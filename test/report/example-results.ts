/** Results made by the real steps from a few lines, for tests of what is written about them. */
import { examine } from '../../src/findings/examine.ts';
import { openFindings } from '../../src/findings/open-findings.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { findPatterns } from '../../src/model/find-patterns.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import type { InputSummary, Inspection, OutputFile, Result } from '../../src/report/result.ts';
import { type TakeLine, takeSetOf } from '../take-set-of.ts';

export interface Example {
  readonly frequencies: readonly number[];
  readonly lines: readonly TakeLine[];
  readonly options?: Partial<ModelOptions>;
  /** Standard uncertainty of a reading in dB. */
  readonly u?: number;
  readonly input?: Partial<InputSummary>;
}

const inputOf = ({ lines, frequencies, input }: Example): InputSummary => ({
  files: [{ name: 'bench.csv', layout: 'long', sha256: 'ab'.repeat(32), bytes: 321, rows: 12 }],
  readings: lines.length * frequencies.length,
  unused: [],
  notices: [],
  ...input,
});

export async function resultOf(example: Example): Promise<Result> {
  const set = takeSetOf(example.frequencies, example.lines);
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, ...example.options });
  const coverage = 0.95;
  const risk = 0.05;
  const tolerance = 1;
  const settled = await settle(set, model, { givenUncertainty: example.u, risk });
  return {
    version: '1.2.3',
    settings: { files: ['bench.csv'], u: example.u ?? null },
    coverage,
    risk,
    tolerance,
    input: inputOf(example),
    set,
    model,
    solution: settled.solution,
    examination: examine(set, model, settled, { coverage, risk, tolerance }),
  };
}

export function inspectionOf(example: Example): Inspection {
  const set = takeSetOf(example.frequencies, example.lines);
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, ...example.options });
  const patterns = findPatterns(set, model);
  const open = openFindings(set, model, patterns);
  return { version: '1.2.3', input: inputOf(example), set, model, patterns, open };
}

export const textOf = (file: OutputFile): string => [...file.chunks()].join('');

/** One frequency, levels in integers: A = 6, B = 4, C = 2 dB, without a spare take; `yonder` and `beyond` stand apart. */
export const ISLANDS: Example = {
  frequencies: [1000],
  lines: [
    { emitter: 'A', receiver: 'B', levels: [10] },
    { emitter: 'A', receiver: 'C', levels: [8] },
    { emitter: 'B', receiver: 'C', levels: [6] },
    { emitter: 'yonder', receiver: 'beyond', levels: [4] },
  ],
  options: { model: 'reciprocal' },
  u: 0.4,
};

/** Every pair of four units, two frequencies; the first take is 6 dB too high: residuals and redundancies by hand. */
export const SHIFTED: Example = {
  frequencies: [1000, 31500],
  lines: [
    { emitter: 'A', receiver: 'B', levels: [6, 0] },
    { emitter: 'A', receiver: 'C', levels: [0, 0] },
    { emitter: 'A', receiver: 'D', levels: [0, 0] },
    { emitter: 'B', receiver: 'C', levels: [0, Number.NaN] },
    { emitter: 'B', receiver: 'D', levels: [0, 0] },
    { emitter: 'C', receiver: 'D', levels: [0, 0] },
  ],
  options: { model: 'reciprocal' },
  u: 0.5,
};

/** Labels that would break a careless writer: separators, quotes, line ends, formulas, comment signs, blanks, escapes. */
export const HOSTILE_LABELS = [
  "=cmd|' /C calc'!A0",
  'a,b',
  'say "x"',
  'two\nlines',
  'cr\rhere',
  '#1',
  ' padded ',
  '@SUM(1)',
  '\u001b[31mred',
  '\u202eturned',
  'Ä€漢字🎈',
];

export const HOSTILE: Example = {
  frequencies: [1000, 2000],
  lines: HOSTILE_LABELS.flatMap((emitter, i) =>
    HOSTILE_LABELS.slice(i + 1).map((receiver) => ({ emitter, receiver, levels: [1, 2], session: emitter })),
  ),
  options: { model: 'reciprocal' },
  u: 0.1,
};

const fortyNames = Array.from({ length: 40 }, (_, i) => `N${String(i).padStart(2, '0')}`);

/** Forty units, each with its three neighbours. */
export const FORTY: Example = {
  frequencies: [1000, 1250, 1600],
  lines: fortyNames.flatMap((emitter, i) =>
    [1, 2, 3].map((step) => ({ emitter, receiver: fortyNames[(i + step) % 40]!, levels: [-20, -21, -22] })),
  ),
  options: { model: 'reciprocal' },
  u: 0.2,
};

/** Two directional parts with session gains that only convention can tell. */
export const DIRECTIONAL: Example = {
  frequencies: [1000, 1250, 1600],
  lines: ['A>B', 'A>C', 'B>A', 'B>C', 'C>A', 'C>B', 'D>yonder'].map((pair, t) => {
    const [emitter, receiver] = pair.split('>') as [string, string];
    return { emitter, receiver, levels: [t, t * t, 3 - t], session: emitter === 'D' ? 'x' : '' };
  }),
  options: { model: 'directional', looseGain: true },
};
