import { COVERAGE_CASES, coverageOf } from './coverage.ts';
import { cleanSets, exchangedLabels, fourFaults, localDips, movedGains, shiftingResonances } from './detection.ts';

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

/** Sets of each kind of fault, by how many times the suite's sets were asked for. */
const sets = Math.round(20 * times);
const detections = [
  ['nothing wrong', cleanSets],
  ['gain moved by 1 dB in one take', movedGains],
  ['exchanged label in one take', exchangedLabels],
  ['dip of 2 dB over a third of an octave in one take', localDips],
  ['four faults of different kinds', fourFaults],
  ['resonance that shifts by 3 % with the partner', shiftingResonances],
] as const;
for (const [title, detect] of detections) {
  const { counts } = await detect(sets);
  const shares = Object.entries(counts).map(([what, count]) => `${what} ${((100 * count) / sets).toFixed(2)} %`);
  process.stdout.write(`${title} (${sets} sets)\n  ${shares.join('; ')}\n`);
}
