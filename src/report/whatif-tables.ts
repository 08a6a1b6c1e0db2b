import type { AssumedBand } from '../whatif/assumed-scatter.ts';
import { type PlannedSeating, seatingOf } from '../whatif/design.ts';
import type { Prediction, TakePrediction, UnitPrediction } from '../whatif/predict.ts';
import { type Column, csvFile } from './csv-file.ts';
import { jsonText } from './json-text.ts';
import { figureCell, frequencyCell } from './number-text.ts';
import type { OutputFile } from './result.ts';
import { whatifRecord } from './whatif-json.ts';
import type { WhatifResult } from './whatif-result.ts';

type InBand<Row> = Row & { readonly scatter: AssumedBand };

const edge = (value: number) => (Number.isNaN(value) ? '' : frequencyCell(value));
const BAND = [
  { name: 'band_from_hz', text: ({ scatter }: InBand<object>) => edge(scatter.from) },
  { name: 'band_to_hz', text: ({ scatter }: InBand<object>) => edge(scatter.to) },
];

const UNITS: readonly Column<InBand<UnitPrediction>>[] = [
  { name: 'unit', text: ({ unit }) => unit },
  { name: 'mount', text: ({ mount }) => mount },
  { name: 'role', text: ({ role }) => role },
  ...BAND,
  { name: 'status', text: ({ status }) => status },
  { name: 'u_db', text: ({ asSeated }) => figureCell(asSeated) },
  { name: 'u_reseat_db', text: ({ reseated }) => figureCell(reseated) },
  { name: 'u_partner_db', text: ({ otherPartner }) => figureCell(otherPartner) },
  { name: 'smallest_effect_db', text: ({ smallestEffect }) => figureCell(smallestEffect) },
  { name: 'chance', text: ({ chance }) => figureCell(chance) },
];

type PlannedTake = InBand<TakePrediction> & { readonly seating: PlannedSeating; readonly id: string };

const TAKES: readonly Column<PlannedTake>[] = [
  { name: 'take', text: ({ id }) => id },
  { name: 'emitter', text: ({ seating }) => seating.emitter },
  { name: 'receiver', text: ({ seating }) => seating.receiver },
  { name: 'kind', text: ({ seating }) => seating.kind },
  ...BAND,
  { name: 'redundancy', text: ({ redundancy }) => figureCell(redundancy) },
  { name: 'smallest_shift_db', text: ({ smallestShift }) => figureCell(smallestShift) },
  { name: 'verdict', text: ({ smallestShift }) => (Number.isNaN(smallestShift) ? 'uncheckable' : 'checked') },
];

interface DesignRow {
  readonly seating: PlannedSeating;
  readonly seatings: number;
}

/** The columns that `whatif` reads back as a design. */
const DESIGN: readonly Column<DesignRow>[] = [
  { name: 'emitter', text: ({ seating }) => seating.emitter },
  { name: 'receiver', text: ({ seating }) => seating.receiver },
  { name: 'seatings', text: ({ seatings }) => (seatings === 0 ? '' : String(seatings)) },
  { name: 'repeats', text: ({ seating }) => String(seating.repeats) },
  { name: 'emitter_mount', text: ({ seating }) => seating.emitterMount },
  { name: 'receiver_mount', text: ({ seating }) => seating.receiverMount },
  { name: 'path', text: ({ seating }) => seating.path },
  { name: 'session', text: ({ seating }) => seating.session },
  { name: 'minutes', text: ({ seating }) => (seating.minutes === undefined ? '' : figureCell(seating.minutes)) },
  { name: 'forbidden', text: ({ seatings }) => (seatings === 0 ? 'yes' : '') },
];

/** The files of `whatif --out`: the last design with what it will deliver. */
export function whatifFiles(result: WhatifResult): OutputFile[] {
  const prediction = result.predictions.at(-1)!;
  return [
    csvFile('design.csv', DESIGN, () => designRows(prediction)),
    csvFile('design-units.csv', UNITS, () =>
      prediction.bands.flatMap(({ units, scatter }) => units.map((unit) => ({ ...unit, scatter }))),
    ),
    csvFile('design-takes.csv', TAKES, () => takeRows(prediction)),
    { name: 'whatif.json', chunks: () => [jsonText(whatifRecord(result))] },
  ];
}

/** Seatings that differ in nothing are one row; forbidden pairs come last. */
function designRows({ bench: { design } }: Prediction): DesignRow[] {
  const rows = new Map<string, DesignRow>();
  for (const seating of design.seatings) {
    const key = JSON.stringify({ ...seating, kind: '', emitterSeating: '', receiverSeating: '' });
    rows.set(key, { seating, seatings: (rows.get(key)?.seatings ?? 0) + 1 });
  }
  return [
    ...rows.values(),
    ...design.forbidden.map(
      ([emitter, receiver]): DesignRow => ({
        seating: seatingOf(emitter, receiver),
        seatings: 0,
      }),
    ),
  ];
}

function* takeRows({ bench, bands }: Prediction): Generator<PlannedTake> {
  for (const { takes, scatter } of bands) {
    for (const take of takes) {
      const seating = bench.design.seatings[bench.seatingOfTake[take.take]!]!;
      yield { ...take, scatter, seating, id: bench.set.takes[take.take]!.id };
    }
  }
}
