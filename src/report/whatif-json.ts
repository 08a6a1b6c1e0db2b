import { compareDesigns } from '../whatif/compare.ts';
import type { PlannedSeating } from '../whatif/design.ts';
import type { BandPrediction, Prediction } from '../whatif/predict.ts';
import { availability, jsonFigure } from './json-text.ts';
import { roundedFrequency } from './number-text.ts';
import type { WhatifResult } from './whatif-result.ts';
import { meritValue, unitText } from './whatif-wording.ts';
import { CAUTIONS } from './wording.ts';

/** Everything that `whatif` says, for programs; its form is told by `schema`. */
export function whatifRecord(result: WhatifResult): Readonly<Record<string, unknown>> {
  const { version, settings, predictions, suggested, ordered, sheet, rehearsal, notices } = result;
  return {
    schema: 'oddloop-whatif/1',
    version,
    settings,
    designs: predictions.map((prediction) => designRecord(prediction)),
    comparison: Object.fromEntries(
      compareDesigns(predictions).map(({ figure, values, isBest }) => [
        figure,
        values.map((value, d) => ({ value: jsonFigure(value), status: availability(value), best: isBest[d] })),
      ]),
    ),
    suggestion:
      suggested === undefined
        ? null
        : {
            for: suggested.criterion,
            budget_minutes: suggested.budget ?? null,
            exhaustive: suggested.suggestion.isExhaustive,
            tried: suggested.suggestion.tried,
            mounted_again: suggested.suggestion.hasAgain,
            steps: suggested.suggestion.steps.map(({ seating, merit }) => ({
              ...pairRecord(seating),
              open: merit.open,
              uncheckable: merit.uncheckable,
              value_db: jsonFigure(meritValue(merit, suggested.criterion)),
              status: availability(meritValue(merit, suggested.criterion)),
            })),
          },
    order:
      ordered === undefined
        ? null
        : {
            seatings: ordered.seatings.map(pairRecord),
            mountings: ordered.mountings,
            mountings_as_given: ordered.given,
            fewest_possible: ordered.isOptimal,
          },
    sheet: sheet === undefined ? null : { csv: sheet.csv, page: sheet.page, takes: sheet.takes.length },
    rehearsal:
      rehearsal === undefined
        ? null
        : {
            runs: rehearsal.runs,
            frequencies: rehearsal.frequencies,
            predicted_db: jsonFigure(rehearsal.predicted),
            seen_db: jsonFigure(rehearsal.seen),
            stated_db: jsonFigure(rehearsal.stated),
            covered: jsonFigure(rehearsal.covered),
            chance: jsonFigure(rehearsal.chance),
            fault_db: jsonFigure(rehearsal.fault),
            planted: rehearsal.planted,
            found: rehearsal.found,
            tied: rehearsal.tied,
            false_alarms: rehearsal.falseAlarms,
            units: rehearsal.units.map(({ name, predicted, seen, stated, covered }) => ({
              unit: name,
              predicted_db: jsonFigure(predicted),
              seen_db: jsonFigure(seen),
              stated_db: jsonFigure(stated),
              covered: jsonFigure(covered),
            })),
          },
    notices,
    cautions: CAUTIONS,
  };
}

function designRecord({ bench, bands, cost, open }: Prediction): Readonly<Record<string, unknown>> {
  return {
    name: bench.design.name,
    model: bench.model.choice.kind,
    units: bench.design.units,
    seatings: bench.design.seatings.map(pairRecord),
    forbidden: bench.design.forbidden,
    takes: cost.takes,
    mountings: cost.mountings,
    minutes: jsonFigure(cost.minutes),
    open: open.map(({ kind, status, responses, extraTakes }) => ({ kind, status, responses, extra_takes: extraTakes })),
    bands: bands.map((band) => bandRecord(band)),
  };
}

function bandRecord({ scatter, units, mean, worst, differences, takes }: BandPrediction) {
  const frequency = (value: number) => (Number.isNaN(value) ? null : roundedFrequency(value));
  return {
    from_hz: frequency(scatter.from),
    to_hz: frequency(scatter.to),
    repeat_db: jsonFigure(scatter.repeat),
    reseat_db: jsonFigure(scatter.reseat),
    partner_db: jsonFigure(scatter.partner),
    assumed: scatter.assumed,
    mean_u_db: jsonFigure(mean),
    worst_u_db: jsonFigure(worst),
    u_status: availability(mean),
    differences: {
      mean_u_db: jsonFigure(differences.mean),
      worst_u_db: jsonFigure(differences.worst),
      told: differences.told,
      all: differences.all,
    },
    units: units.map((unit) => ({
      name: unitText(unit),
      unit: unit.unit,
      mount: unit.mount === '' ? null : unit.mount,
      role: unit.role,
      status: unit.status,
      u_db: jsonFigure(unit.asSeated, 12),
      u_reseat_db: jsonFigure(unit.reseated, 12),
      u_partner_db: jsonFigure(unit.otherPartner, 12),
      smallest_effect_db: jsonFigure(unit.smallestEffect),
      chance: jsonFigure(unit.chance),
    })),
    takes: takes.map(({ redundancy, smallestShift }) => ({
      redundancy: jsonFigure(redundancy),
      smallest_shift_db: jsonFigure(smallestShift),
      status: Number.isNaN(smallestShift) ? 'uncheckable' : 'checked',
    })),
  };
}

function pairRecord(seating: PlannedSeating): Readonly<Record<string, unknown>> {
  const { emitter, receiver, emitterMount, receiverMount, path, session, repeats, kind } = seating;
  const label = (text: string) => (text === '' ? null : text);
  return {
    emitter,
    receiver,
    emitter_mount: label(emitterMount),
    receiver_mount: label(receiverMount),
    path: label(path),
    session: label(session),
    repeats,
    kind,
  };
}
