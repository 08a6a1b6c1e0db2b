import { hertz } from '../quantity/frequency.ts';
import { bandHolding, bandsHolding, type OctaveBand } from '../quantity/octave-bands.ts';

/** The third-octave bands that hold the frequencies, and the band of each frequency as an index into them. */
export interface ThirdOctaves {
  readonly bands: readonly OctaveBand[];
  readonly bandOf: Int32Array;
}

export function thirdOctaves(frequencies: Float64Array): ThirdOctaves {
  const bands = bandsHolding(frequencies, 3);
  const position = new Map(bands.map((band, b) => [band.index, b]));
  const bandOf = Int32Array.from(frequencies, (frequency) => position.get(bandHolding(hertz(frequency), 3).index)!);
  return { bands, bandOf };
}
