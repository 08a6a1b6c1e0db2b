import { expect, test } from 'vitest';
import { COVERAGE, COVERAGE_CASES, coverageOf } from './coverage.ts';

/** What is promised: 95 % ± 1.5 %. */
const PROMISED = 0.015;
/** The promise is told from chance where it is at least so many sampling errors wide. */
const SAMPLING_ERRORS = 5;

for (const bench of COVERAGE_CASES.filter(({ use }) => use === undefined)) {
  test(`responses hold the truth within their expanded uncertainty at 95 % ± 1.5 %: ${bench.title}`, async () => {
    const { coverage, samplingError } = await coverageOf(bench, bench.sets);
    expect(samplingError * SAMPLING_ERRORS).toBeLessThan(PROMISED);
    expect(Math.abs(coverage - COVERAGE)).toBeLessThan(PROMISED);
  });
}

/** The promise for the three uses: 95 % ± 2 % where variances come from at least 10 degrees of freedom, and wider below. */
const PROMISED_OF_USES = 0.02;
const ENOUGH_DOF = 10;

for (const bench of COVERAGE_CASES.filter(({ use }) => use !== undefined)) {
  test(`a fresh draw lies within the expanded uncertainty of its use at 95 % ± 2 %, or more often: ${bench.title}`, async () => {
    const { coverage, samplingError, medianDof } = await coverageOf(bench, bench.sets);
    expect(samplingError * SAMPLING_ERRORS).toBeLessThan(PROMISED_OF_USES);
    expect(coverage).toBeGreaterThan(COVERAGE - PROMISED_OF_USES);
    if (medianDof >= ENOUGH_DOF) expect(coverage).toBeLessThan(COVERAGE + PROMISED_OF_USES);
  });
}

test('where only a few degrees of freedom stand behind an uncertainty, they are few in the result too', async () => {
  const dof = async (title: string) =>
    (await coverageOf(COVERAGE_CASES.find((bench) => bench.title === title)!, 2)).medianDof;
  // Three pairs, each repeated once.
  expect(await dof('u from repeats, one frequency a band')).toBe(3);
  // Six readings for four units; the redundancy is a sum of six quotients of small integers.
  expect(Math.abs((await dof('u from residuals, one frequency a band')) - 2)).toBeLessThan(100 * Number.EPSILON);
  expect(await dof('each reading with a u_db of its own')).toBe(Number.POSITIVE_INFINITY);
});
