import { describe, expect, test } from 'vitest';
import { covarianceFile } from '../../src/report/covariance-json.ts';
import { inspectRecord } from '../../src/report/inspect-json.ts';
import { jsonFigure, jsonLevel, jsonText } from '../../src/report/json-text.ts';
import { outputFiles } from '../../src/report/output-files.ts';
import { summaryRecord } from '../../src/report/summary-json.ts';
import {
  DIRECTIONAL,
  FORTY,
  HOSTILE,
  HOSTILE_LABELS,
  ISLANDS,
  inspectionOf,
  resultOf,
  SHIFTED,
  textOf,
} from './example-results.ts';
import { AGREES, FLAGGED, HOLD, judgedResult } from './judged-results.ts';

const EXAMPLES = [ISLANDS, SHIFTED, DIRECTIONAL, FORTY, HOSTILE];

test('a number that JSON cannot hold stops the writing instead of becoming null', () => {
  expect(() => jsonText({ deep: [{ level_db: Number.NaN }] })).toThrow(/level_db is NaN/);
  expect([jsonLevel(Number.NaN), jsonLevel(-1e-9), jsonFigure(Number.POSITIVE_INFINITY)]).toEqual([null, 0, 'inf']);
});

describe('summary.json', () => {
  test('says settings, files with their fingerprint, counts, and each unit with its status', async () => {
    const summary = JSON.parse(jsonText(summaryRecord(await resultOf(ISLANDS))));
    expect(summary).toMatchObject({
      schema: 'oddloop-summary/1',
      version: '1.2.3',
      settings: { files: ['bench.csv'], u: 0.4 },
      input: { files: [{ name: 'bench.csv', sha256: 'ab'.repeat(32) }], readings: 4, unused: 0 },
      counts: { takes: 4, units: 5, pairs: 4, sessions: 1, frequencies: 1, from_hz: 1000, to_hz: 1000 },
      model: { kind: 'reciprocal' },
      uncertainty: { source: 'given', coverage: 0.95 },
    });
    expect(summary.units[0]).toMatchObject({ unit: 'A', median_level_db: 6, level_status: 'ok', unchecked: true });
    expect(summary.units[3]).toMatchObject({
      unit: 'yonder',
      median_level_db: null,
      level_status: 'open',
      median_expanded_db: null,
      u_status: 'not available',
      frequencies: { ok: 0, datum: 0, open: 1 },
    });
    expect(summary.open[0]).toMatchObject({ kind: 'no odd loop', extra_takes: [{ emitter: 'yonder', receiver: 'A' }] });
    expect(summary.parts[0]).toMatchObject({ fixed_by: 'odd loop', frequency_runs_hz: [[1000, 1000]] });
  });

  test('what cannot be told is null with a status beside it', async () => {
    const { whole } = JSON.parse(jsonText(summaryRecord(await resultOf(ISLANDS))));
    expect(whole).toMatchObject({ chi_square_per_dof: null, chi_square_status: 'not available' });
    const shifted = JSON.parse(jsonText(summaryRecord(await resultOf(SHIFTED))));
    // Residuals are 2 in the shifted take and in the pair C > D, −1 in the other four: Σ v² = 12; 2 + 1 degrees of freedom; u = 0.5.
    expect(shifted.whole).toMatchObject({
      degrees_of_freedom: 3,
      chi_square_per_dof: 16,
      chi_square_status: 'available',
    });
  });

  test('datum conventions and gains that rest on one are told', async () => {
    const summary = JSON.parse(jsonText(summaryRecord(await resultOf(DIRECTIONAL))));
    expect(summary.datum.map((entry: { convention: string }) => entry.convention)).toContain(
      'mean(emit − receive) = 0 dB over A, B, C',
    );
    expect(summary.gains).toMatchObject([
      { name: 'gain', status: 'datum' },
      { name: 'gain x', status: 'datum' },
    ]);
  });

  test('takes that disagree come with everything that their explanations rest on', async () => {
    const result = await judgedResult(SHIFTED, [
      FLAGGED,
      { ...AGREES, verdict: 'uncheckable', pValue: Number.NaN, cure: { emitter: 'A', receiver: 'E', path: '' } },
      { ...FLAGGED, verdict: 'tied', isLeftOut: false, tiedWith: [3] },
      { ...FLAGGED, verdict: 'tied', isLeftOut: false, tiedWith: [2] },
    ]);
    const { takes } = JSON.parse(jsonText(summaryRecord(result)));
    expect(takes).toMatchObject({
      counts: { agrees: 2, flagged: 1, tied: 2, uncheckable: 1, not_tested: 0 },
      model_fails: false,
      left_out: ['T001'],
      uncheckable: [{ take: 'T002', extra_take: { emitter: 'A', receiver: 'E', path: null } }],
    });
    expect(takes.flagged).toMatchObject([
      {
        take: 'T001',
        emitter: 'A',
        receiver: 'B',
        file: 'bench.csv',
        line: 2,
        p_value: 1e-9,
        worst: { from_hz: 891, to_hz: 1122, level_db: 3.5 },
        explanations: [{ kind: 'moved gain', gain_db: 3.08, u_db: 0.12, dof: 'inf', behind: 0, equally_good: true }],
        reads_like: 'moved gain, +3.08 dB ± 0.24 dB',
      },
    ]);
    expect(takes.tied.map((tied: { tied_with: string[] }) => tied.tied_with)).toEqual([['T004'], ['T003']]);
  });

  test('where responses do not hold is listed with its figures, and how many hold', async () => {
    const broken = { ...HOLD, verdict: 'broken', partner: 2.5, low: 2, high: 3.25, pValue: 1e-5 } as const;
    const result = await judgedResult(SHIFTED, [], { holds: [HOLD, { ...broken, unit: 'B' }] });
    expect(JSON.parse(jsonText(summaryRecord(result))).mounting).toEqual({
      tolerance_db: 1,
      counts: { holds: 1, strained: 0, broken: 1, not_testable: 0 },
      broken: [
        { unit: 'B', mount: null, from_hz: 891, to_hz: 1122, partner_db: 2.5, low_db: 2, high_db: 3.25, p_value: 1e-5 },
      ],
      strained: [],
      model_fails: [],
    });
  });

  test('labels come back as they are', async () => {
    const summary = JSON.parse(jsonText(summaryRecord(await resultOf(HOSTILE))));
    expect(summary.units.map((unit: { unit: string }) => unit.unit)).toEqual(HOSTILE_LABELS);
  });
});

describe('covariance.json', () => {
  test('three units from three pairs: variance 3/4 u², covariance −1/4 u²; open responses are not in the triangle', async () => {
    const { responses, blocks } = JSON.parse(textOf(covarianceFile(await resultOf(ISLANDS))));
    expect(responses.map((response: { name: string }) => response.name)).toEqual(['A', 'B', 'C', 'yonder', 'beyond']);
    expect(blocks).toHaveLength(1);
    expect(blocks[0]).toMatchObject({
      frequencies_hz: [1000],
      scales_db2: [0.16],
      responses: [0, 1, 2],
      status: 'available',
    });
    expect(blocks[0].triangle).toEqual([0.75, -0.25, 0.75, -0.25, -0.25, 0.75]);
    expect(blocks[0].common_triangle_db2).toBeNull();
  });

  test('the diagonal is the square of u_db in responses.csv, gains included', async () => {
    // Two sessions tied through shared pairs, so that the second gain is known against the first.
    const lines = ['A>B', 'A>C', 'B>C', 'A>D', 'B>D'].flatMap((pair, t) => {
      const [emitter, receiver] = pair.split('>') as [string, string];
      return ['am', 'pm'].map((session) => ({ emitter, receiver, session, u: 0.1 + t / 10, levels: [t, t + 1] }));
    });
    const result = await resultOf({
      frequencies: [1000, 2000],
      lines,
      options: { model: 'reciprocal', looseGain: true },
    });
    const { blocks } = JSON.parse(textOf(covarianceFile(result)));
    expect(blocks.length).toBeGreaterThan(0);
    const n = result.model.linksPerFrequency;
    for (const block of blocks) {
      expect(block.common_triangle_db2).not.toBeNull();
      block.frequencies_hz.forEach((frequency: number, k: number) => {
        const f = result.set.frequencies.indexOf(frequency);
        block.responses.forEach((response: number, i: number) => {
          const at = (i * (i + 3)) / 2;
          const variance = block.scales_db2[k] * block.triangle[at] + block.common_triangle_db2[at];
          const u = result.solution.uncertainty[f * n + result.model.responses[response]!.link]!;
          // Ten digits are written.
          expect(Math.abs(variance / u ** 2 - 1)).toBeLessThan(1e-8);
        });
      });
    }
  });

  test('without uncertainty the scale is null, with a status', async () => {
    const { u: _, ...without } = ISLANDS;
    const { blocks } = JSON.parse(textOf(covarianceFile(await resultOf(without))));
    expect(blocks[0]).toMatchObject({ scales_db2: [null], status: 'not available' });
  });
});

test('every JSON output parses, holds no NaN, and is the same from the same input', async () => {
  for (const example of EXAMPLES) {
    const texts = async () => {
      const files = outputFiles(await resultOf(example)).filter((file) => file.name.endsWith('.json'));
      return [...files.map(textOf), jsonText(inspectRecord(inspectionOf(example)))];
    };
    const first = await texts();
    expect(first).toHaveLength(3);
    for (const text of first) {
      expect(() => JSON.parse(text)).not.toThrow();
      expect(text).not.toMatch(/NaN|Infinity|undefined/);
    }
    expect(await texts()).toEqual(first);
  }
});

test('all outputs of solve are listed under the names of the contract', async () => {
  expect(outputFiles(await resultOf(ISLANDS)).map((file) => file.name)).toEqual([
    'responses.csv',
    'takes.csv',
    'pairs.csv',
    'residuals.csv',
    'loops.csv',
    'scatter.csv',
    'holds.csv',
    'mounts.csv',
    'unused.csv',
    'summary.json',
    'covariance.json',
  ]);
});

test('inspect --json tells pairs with their takes, ranges, and that seatings are assumed', () => {
  const record = JSON.parse(jsonText(inspectRecord(inspectionOf(SHIFTED))));
  expect(record).toMatchObject({
    schema: 'oddloop-inspection/1',
    seatings: { given: 0, takes_with_seatings: 0, assumed: true },
    sessions: [{ session: null, takes: 6 }],
  });
  expect(record.pairs[3]).toEqual({ emitter: 'B', receiver: 'C', takes: ['T004'] });
  expect(record.ranges).toEqual([
    { from_hz: 1000, to_hz: 31500, readings: 2, takes: ['T001', 'T002', 'T003', 'T005', 'T006'] },
    { from_hz: 1000, to_hz: 1000, readings: 1, takes: ['T004'] },
  ]);
});
