import type { Model } from '../model/model.ts';
import type { SystematicEffect } from '../model/systematic-effects.ts';
import type { RandomStream } from '../numeric/random.ts';
import type { Distribution } from '../readings/budget-lines.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { Solution } from './solution.ts';
import type { KnownValues } from './solve-again.ts';

/** The errors of one draw beside those of the readings as read. */
export interface DrawnErrors {
  /** T × F, standard deviation in dB of a reading as read. */
  readonly deviation: Float64Array;
  /** Values of the known links in this draw. */
  readonly known: KnownValues;
  /** Draws what holds for the whole draw: known values and effects. */
  next(stream: RandomStream): void;
  /** Adds seatings, partners and systematic effects to levels. */
  addTo(levels: Float64Array, stream: RandomStream): void;
}

/** @param model with shared seatings as links, where there are any. */
export function drawErrors(
  set: TakeSet,
  model: Model,
  solution: Solution,
  effects: readonly SystematicEffect[],
): DrawnErrors {
  const { scatter, readingUncertainty: reading } = solution;
  const width = set.frequencies.length;
  const single = (scatter?.single ?? reading.values).map((u, cell) => u / (set.noiseFactor?.[cell] ?? 1));
  const knownErrors = new Float64Array(model.linksPerFrequency);
  const amounts = new Float64Array(effects.length);

  return {
    deviation: single,
    known: (link, f) => {
      const { prior } = model.links[link]!;
      return prior!.kind === 'random' ? 0 : prior!.value[f]! + prior!.uncertainty[f]! * knownErrors[link]!;
    },
    next(stream) {
      for (let link = 0; link < knownErrors.length; link++) {
        if (model.links[link]!.prior?.kind === 'known') knownErrors[link] = stream.normal();
      }
      effects.forEach(({ line }, k) => {
        amounts[k] = line.uncertainty * standardDraw(stream, line.distribution);
      });
    },
    addTo(into, stream) {
      effects.forEach(({ factors, reaches }, k) => {
        for (let f = 0; f < width; f++) {
          if (!reaches[f]) continue;
          for (let t = 0; t < factors.length; t++)
            into[t * width + f] = into[t * width + f]! + factors[t]! * amounts[k]!;
        }
      });
      if (scatter === undefined) return;
      const { layout, shared, sharedDeviation } = scatter;
      const count = shared.seatings.length;
      const ofShared = new Float64Array(count);
      for (let f = 0; f < width; f++) {
        const level = scatter.levelOf[f];
        if (level === undefined) continue;
        for (let s = 0; s < count; s++) {
          ofShared[s] = sharedDeviation[f * count + s]! * stream.normal();
        }
        layout.groups.forEach(({ ends }, chain) => {
          const ofPartner = drawnShares(stream, ends, level.partner?.shares);
          for (let seat = layout.seatStart[chain]!; seat < layout.seatStart[chain + 1]!; seat++) {
            const ofSeat = drawnShares(stream, shared.ownEnds[seat]!, level.seating?.shares);
            for (const t of layout.takes[seat]!) {
              let sum = ofPartner + ofSeat;
              for (const s of shared.ofTake[t]!) sum += ofShared[s]!;
              into[t * width + f] = into[t * width + f]! + sum;
            }
          }
        });
      }
    },
  };
}

function drawnShares(stream: RandomStream, ends: readonly number[], shares: Float64Array | undefined): number {
  if (shares === undefined) return 0;
  let variance = 0;
  for (const end of ends) variance += shares[end]!;
  return variance > 0 ? Math.sqrt(variance) * stream.normal() : 0;
}

/** A draw with mean 0 and standard deviation 1. Source: JCGM 101:2008, 6.4.2, 6.4.5, 6.4.6. */
function standardDraw(stream: RandomStream, distribution: Distribution): number {
  switch (distribution) {
    case 'normal':
      return stream.normal();
    case 'rectangular':
      return Math.sqrt(3) * (2 * stream.uniform() - 1);
    case 'triangular':
      return Math.sqrt(6) * (stream.uniform() + stream.uniform() - 1);
    case 'u-shaped':
      return Math.SQRT2 * Math.cos(2 * Math.PI * stream.uniform());
  }
}
