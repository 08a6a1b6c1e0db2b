import { describe, expect, test } from 'vitest';
import type { TakeFinding } from '../../src/findings/examination.ts';
import type { Explanation } from '../../src/findings/explanations.ts';
import type { HoldFinding } from '../../src/findings/holds.ts';
import { unitHolds } from '../../src/report/held-bands.ts';
import { bandsText, holdsCell } from '../../src/report/hold-wording.ts';
import { PLAIN_STYLE, type Result } from '../../src/report/result.ts';
import { adviceText, readsLike } from '../../src/report/take-wording.ts';
import { terminalSummary } from '../../src/report/terminal-summary.ts';
import { displayWidth } from '../../src/report/text-layout.ts';
import { bandText } from '../../src/report/wording.ts';
import { SHIFTED } from './example-results.ts';
import { AGREES, explainedBy, FLAGGED, HOLD, judgedResult, MOVED_GAIN } from './judged-results.ts';

const said = (result: Result) => {
  const text = terminalSummary(result, { folder: undefined, style: PLAIN_STYLE });
  for (const line of text.split('\n')) expect(displayWidth(line), line).toBeLessThanOrEqual(80);
  return text.replace(/\s+/g, ' ');
};
const COVERAGE = 0.95;

const SLOPE: Explanation = { kind: 'slope', perDecade: -1.5, uncertainty: 0.1, shift: 0.4 };
const DIP: Explanation = { kind: 'local', from: 20e3, to: 25e3, centre: 22.4e3, height: -2, uncertainty: 0.2 };
const SCATTER: Explanation = { kind: 'scatter', factor: 3.14 };
const REVERSED: Explanation = { kind: 'direction reversed' };
const label = (unit: string, end: 'emitter' | 'receiver' = 'emitter'): Explanation => ({
  kind: 'another label',
  end,
  unit,
});

describe('what a take reads like, and what to do', () => {
  const flagged = (explanations: readonly Explanation[], likely?: number): TakeFinding => ({
    ...FLAGGED,
    take: 0,
    explained: explainedBy(explanations, likely),
  });

  // Expanded with k = 1.96 (normal, 95 %): 0.12 → 0.24, 0.1 → 0.20, 0.2 → 0.39 dB.
  test.each([
    [
      MOVED_GAIN,
      'moved gain, +3.08 dB ± 0.24 dB',
      'Check the gain settings; if a known gain moved, give it as gain_db, else take A > B again.',
    ],
    [
      SLOPE,
      'slope along frequency, -1.50 dB ± 0.20 dB a decade, with +0.40 dB in the middle',
      'Check cables and couplant; take A > B again.',
    ],
    [
      DIP,
      'dip at 22.4 kHz (20–25 kHz), -2.00 dB ± 0.39 dB',
      'Check the mounting and couplant of both units; take A > B again.',
    ],
    [SCATTER, 'scatter, 3.1 times that of other takes', 'Check for loose contacts and noise; take A > B again.'],
    [
      label('C'),
      "another unit's label: C as emitter",
      'Check whether it was C that stood in the place of A; if so, correct the label, else take A > B again.',
    ],
    [
      label('C', 'receiver'),
      "another unit's label: C as receiver",
      'Check whether it was C that stood in the place of B; if so, correct the label, else take A > B again.',
    ],
    [
      REVERSED,
      'direction reversed',
      'Check whether B was driven and A listened; if so, exchange the labels, else take A > B again.',
    ],
  ])('%j', async (explanation, reading, advice) => {
    const finding = flagged([explanation]);
    expect(readsLike(finding, COVERAGE)).toBe(reading);
    expect(adviceText(await judgedResult(SHIFTED, []), finding)).toBe(advice);
  });

  test('explanations that the data do not tell apart are all named, others are not', () => {
    expect(readsLike(flagged([REVERSED, SCATTER, DIP], 2), COVERAGE)).toBe(
      'direction reversed, or scatter, 3.1 times that of other takes',
    );
  });

  test('a slope that is no better than a moved gain comes after it', () => {
    expect(readsLike(flagged([SLOPE, MOVED_GAIN]), COVERAGE)).toMatch(/^moved gain, .*, or slope along frequency, /);
    expect(readsLike(flagged([SLOPE, MOVED_GAIN], 1), COVERAGE)).toMatch(/^slope along frequency, [^m]*middle$/);
  });

  test('where many labels fit, they are counted', async () => {
    const finding = flagged([label('C'), label('D'), label('E'), SCATTER]);
    expect(readsLike(finding, COVERAGE)).toMatch(/^another unit's label \(3 of them fit\), or scatter, /);
    expect(adviceText(await judgedResult(SHIFTED, []), finding)).toBe(
      'Check the labels, then for loose contacts and noise; correct a wrong one, else take A > B again.',
    );
  });

  test('a take that agrees reads like nothing and needs nothing', async () => {
    const finding = { ...AGREES, take: 0 };
    expect([readsLike(finding, COVERAGE), adviceText(await judgedResult(SHIFTED, []), finding)]).toEqual(['', '']);
  });
});

describe('the terminal summary of takes', () => {
  test('flagged takes are told worst first: which, by how much, where, what it reads like, what to do', async () => {
    const milder = { ...FLAGGED, pValue: 1e-5, explained: explainedBy([label('D')]) };
    const text = said(await judgedResult(SHIFTED, [milder, FLAGGED]));
    expect(text).toContain('2 of 6 takes disagree with the rest and were left out: T002 and T001.');
    expect(text).toContain(
      'Takes that disagree, worst first: redo these - T002: A > C; bench.csv:4 3.0 dB (rms) off what the others say of it, most at 890 Hz–1.1 kHz (+3.5 dB). Reads like: moved gain, +3.08 dB ± 0.24 dB. Check the gain settings; if a known gain moved, give it as gain_db, else take A > C again. - T001: A > B; bench.csv:2',
    );
  });

  test('of many, ten are told and the rest is counted', async () => {
    const lines = Array.from({ length: 13 }, (_, t) => ({ ...SHIFTED.lines[t % 6]!, session: `s${t}` }));
    const text = said(await judgedResult({ ...SHIFTED, lines }, Array(13).fill(FLAGGED)));
    expect(text.match(/Reads like/g)).toHaveLength(10);
    expect(text).toContain('- And 3 more takes: see takes.csv.');
  });

  test('a tie names the takes that could be at fault and the one take that settles it, once', async () => {
    const tied = { ...FLAGGED, verdict: 'tied', isLeftOut: false } as const;
    const cure = { emitter: 'A', receiver: 'E', path: '' };
    const text = said(
      await judgedResult(SHIFTED, [{ ...tied, tiedWith: [2], cure }, AGREES, { ...tied, tiedWith: [0] }]),
    );
    expect(text).toContain('T001 and T003 are tied: one of them is at fault, and nothing tells which.');
    expect(
      text.match(/Tied: the takes cannot tell which of T001 \(A > B\) and T003 \(A > D\) is at fault/g),
    ).toHaveLength(1);
    expect(text).toContain(
      'Take A > B again, mounted anew: if it comes out different, T001 was at fault; if not, it was T003.',
    );
    expect(text).not.toContain('redo these');
  });

  test('takes that nothing checks come with the take that would, those with the same cure together', async () => {
    const unchecked = { ...AGREES, verdict: 'uncheckable', pValue: Number.NaN } as const;
    const cure = { emitter: 'A', receiver: 'E', path: 'block' };
    const same = { emitter: 'B', receiver: 'C', path: '' };
    const text = said(
      await judgedResult(SHIFTED, [
        { ...unchecked, cure },
        { ...unchecked, cure },
        AGREES,
        { ...unchecked, cure: same },
      ]),
    );
    expect(text).toContain('No take disagrees with the rest; nothing checks 3 of 6 takes.');
    expect(text).toContain('- Nothing checks T001 (A > B) and T002 (A > C); A > E over block would.');
    expect(text).toContain('- Nothing checks T004 (B > C); B > C mounted anew would.');
  });

  test('takes that could not be tested are not said to agree', async () => {
    const text = said(await judgedResult(SHIFTED, Array(6).fill({ ...AGREES, verdict: 'not tested' })));
    expect(text).toContain('No take could be tested');
    expect(text).not.toContain('No take disagrees');
  });

  test('a model that fails as a whole is said before anything else, and no take is called the one to redo', async () => {
    const { whole } = (await judgedResult(SHIFTED, [])).examination;
    const kept = { ...FLAGGED, isLeftOut: false };
    const text = said(await judgedResult(SHIFTED, [kept, kept, kept], { whole: { ...whole, isModelFailing: true } }));
    expect(text).toMatch(
      /31\.5 kHz\. THE ADDITIVE MODEL FAILS: 3 of 6 takes disagree with the rest, more than can be left out/,
    );
    expect(text).not.toContain('redo these');
    expect(text).toContain('3.0 dB (rms) off the fit');
  });
});

describe('the terminal summary of mounting', () => {
  const THIRDS: readonly (readonly [number, number])[] = [
    [891, 1122],
    [1122, 1413],
    [1413, 1778],
  ];
  const unit = (name: string, verdicts: readonly HoldFinding['verdict'][], partner = 0.1): HoldFinding[] =>
    verdicts.map((verdict, b) => ({
      ...HOLD,
      unit: name,
      from: THIRDS[b]![0],
      to: THIRDS[b]![1],
      verdict,
      partner: verdict === 'broken' ? 2.5 : verdict === 'strained' ? 0.4 : partner,
      low: verdict === 'broken' ? 2 : verdict === 'strained' ? 0.3 : 0,
      high: verdict === 'broken' ? 3.2 : 0.6,
    }));
  const holding = ['B', 'C', 'D'].flatMap((name) => unit(name, ['holds', 'holds', 'holds']));
  /** @param failing indices of the thirds in which the model itself fails. */
  const judged = async (holds: readonly HoldFinding[], failing: readonly number[] = []) => {
    const bands = failing.map((b) => ({ from: THIRDS[b]![0], to: THIRDS[b]![1], typical: 2.5, low: 2 }));
    return said(await judgedResult(SHIFTED, [], { holds, failing: bands }));
  };

  test('is good where every unit holds in every band', async () => {
    const text = await judged([...unit('A', ['holds', 'holds', 'holds']), ...holding]);
    expect(text).toContain(
      'Mounting independence holds: no response depends on its partner by more than 1 dB, in any band.',
    );
    expect(text).toMatch(/ A 1\.00 0\.66 all /);
    expect(text).not.toContain('Responses that depend');
  });

  test('says for which unit and where it breaks, by how much, and what that means', async () => {
    const text = await judged([...unit('A', ['holds', 'broken', 'strained']), ...holding]);
    expect(text).toContain(
      'Mounting independence holds in every band for 3 of 4 units; it breaks for A (1.1–1.4 kHz).',
    );
    expect(text).toContain(
      'A: broken at 1.1–1.4 kHz: it changes with its partner by 2.5 dB (standard deviation; 2.0 dB to 3.2 dB). Its level there is a mean over the partners of this bench only: do not carry it to another one. Strained at 1.4–1.8 kHz: up to 0.40 dB (0.30 dB to 0.60 dB), within the tolerance of 1 dB; allow for it there.',
    );
    expect(text).toMatch(/ A 1\.00 0\.66 890 Hz–1\.1 kHz /);
  });

  test('says what cannot be judged, and does not call it holding', async () => {
    const some = await judged([...unit('A', ['holds', 'not testable', 'holds']), ...holding]);
    expect(some).toContain('it cannot be judged for A (1.1–1.4 kHz), where further partners would tell.');
    const none = await judged(['A', 'B', 'C', 'D'].flatMap((name) => unit(name, Array(3).fill('not testable'))));
    expect(none).toContain('Whether a response depends on its partner cannot be tested');
    expect(none).not.toContain('Mounting independence');
    expect(none).not.toMatch(/U, dB holds/);
  });

  test('a model that fails in every band is said first, without a list of every unit', async () => {
    const text = await judged(
      ['A', 'B', 'C', 'D'].flatMap((name) => unit(name, ['broken', 'broken', 'broken'])),
      [0, 1, 2],
    );
    expect(text).toMatch(/31\.5 kHz\. THE ADDITIVE MODEL FAILS in every band \(890 Hz–1\.8 kHz\): a typical unit/);
    expect(text).toContain('No level below can be relied on');
    expect(text).not.toContain('Responses that depend');
    expect(text).not.toContain('Mounting independence');
  });

  test('a model that fails in one band is said to fail there', async () => {
    const text = await judged(
      ['A', 'B', 'C', 'D'].flatMap((name) => unit(name, ['holds', 'broken', 'holds'])),
      [1],
    );
    expect(text).toContain('THE ADDITIVE MODEL FAILS at 1.1–1.4 kHz:');
    expect(text).toContain('Mounting independence breaks in some bands for A, B, C and D.');
  });

  test('the cell of a unit takes the shorter of where it holds and where it does not', () => {
    const cell = (...verdicts: HoldFinding['verdict'][]) => holdsCell(unitHolds(unit('A', verdicts))[0]);
    expect(cell('holds', 'holds', 'holds')).toBe('all');
    expect(cell('strained', 'broken', 'holds')).toBe('1.4–1.8 kHz');
    expect(cell('holds', 'holds', 'broken')).toBe('890 Hz–1.4 kHz');
    expect(cell('broken', 'not testable', 'broken')).toBe('none');
    expect(cell('not testable', 'not testable', 'not testable')).toBe('not testable');
    expect(holdsCell(undefined)).toBe('not testable');
  });

  test('where the bands are many, they are counted', () => {
    const bands = Array.from(
      { length: 12 },
      (_, b): HoldFinding => ({
        ...HOLD,
        from: 1000 * 2 ** b,
        to: 2000 * 2 ** b,
        verdict: b % 2 ? 'holds' : 'strained',
      }),
    );
    expect(holdsCell(unitHolds(bands)[0])).toBe('6 of 12 bands');
  });
});

test('bands are told with two digits an edge, neighbours joined', () => {
  expect(bandText({ from: 70795, to: 89125 })).toBe('71–89 kHz');
  expect(bandText({ from: 891, to: 1122 })).toBe('890 Hz–1.1 kHz');
  expect(
    bandsText([
      { from: 100, to: 200 },
      { from: 200, to: 300 },
      { from: 500, to: 600 },
    ]),
  ).toBe('100–300 Hz and 500–600 Hz');
});
