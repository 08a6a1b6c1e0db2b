import { COVERAGE_CASES, coverageOf } from './coverage.ts';

/*
 * The simulations at length: `npm run simulate` for ten times as many sets as the suite takes, `npm run simulate -- 50`
 * for fifty times as many.
 */

const [text = '10'] = process.argv.slice(2);
const times = Number(text);
if (!(times >= 1)) throw new RangeError(`how many times the suite's sets is a number from 1, not ${text}`);

for (const bench of COVERAGE_CASES) {
  const { sets, intervals, coverage, samplingError, medianDof } = await coverageOf(
    bench,
    Math.round(times * bench.sets),
  );
  const share = `${(100 * coverage).toFixed(2)} % ± ${(100 * samplingError).toFixed(2)} %`;
  const dof = medianDof === Number.POSITIVE_INFINITY ? 'known' : medianDof.toFixed(0);
  process.stdout.write(
    `${bench.title}\n  truth held ${share} (one sampling error); ${intervals} intervals in ${sets} sets; dof ${dof}\n`,
  );
}
