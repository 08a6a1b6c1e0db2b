/** Pictures of a design: who will be measured against whom, and what that will deliver. */
import type { Prediction } from '../../whatif/predict.ts';
import { stretchText, unitText } from '../whatif-wording.ts';
import type { Figure, LegendEntry } from './figure.ts';
import { element } from './markup.ts';
import { networkSketch } from './network-figure.ts';
import { networkOf } from './network-layout.ts';
import { figureText } from './numbers.ts';
import { type PlannedTake, takesByRedundancy } from './planned-takes.ts';
import { plannedText, predictedText, redundancyText } from './planned-wording.ts';
import { markShape, valueRows } from './value-rows.ts';

/** Bars of the takes that are checked least; the table of numbers has all. */
export const MOST_BARS = 60;

const USES = ['as seated', 'seated again', 'on another partner'] as const;

/** The pairs of a design on a ring of its units, made already or to come. */
export function plannedNetwork({ bench, bands, worstBand }: Prediction): Figure {
  const { design, model, set } = bench;
  const { units } = bands[worstBand]!;
  const named = new Set(set.takes.flatMap(({ emitter, receiver }) => [emitter, receiver]));
  const network = networkOf({
    takes: set.takes,
    isDirected: model.choice.kind === 'directional',
    disagreeing: new Set(),
    open: new Set(units.filter(({ status }) => status === 'open').map((unit) => unitText({ ...unit, role: 'both' }))),
    untaken: design.units.filter((unit) => !named.has(unit)),
  });
  const { nodes, edges, isDirected } = network;
  return {
    name: 'network',
    ...plannedText(network, set.takes.length),
    ...networkSketch(network, 'pair not planned'),
    numbers: {
      columns: [...(isDirected ? ['emitter', 'receiver'] : ['unit', 'unit']), 'takes'],
      rows: () => edges.map(({ from, to, takes }) => [nodes[from]!.name, nodes[to]!.name, String(takes)]),
    },
  };
}

/** Standard uncertainty of each unit for three uses, in the worst band; the numbers have all bands. */
export function predictedUncertainty(prediction: Prediction): Figure {
  const { bands, worstBand } = prediction;
  const band = bands[worstBand]!;
  const rows = band.units.map((unit) => ({
    name: unitText(unit),
    values: [unit.asSeated, unit.reseated, unit.otherPartner],
    remark: unit.status === 'open' ? 'open: no level' : '',
  }));
  return {
    name: 'predicted',
    ...predictedText(band),
    drawing: valueRows(rows, { title: 'Predicted standard uncertainty, dB', look: 'marks' }),
    numbers: {
      columns: ['band', 'unit', 'status', ...USES.map((use) => `u ${use}, dB`)],
      rows: () =>
        bands.flatMap(({ scatter, units }) =>
          units.map((unit) => [
            stretchText(scatter),
            unitText(unit),
            unit.status,
            ...[unit.asSeated, unit.reseated, unit.otherPartner].map(figureText),
          ]),
        ),
    },
    legend: USES.map(
      (name, use): LegendEntry => ({
        name,
        sample: element('g', { transform: 'translate(14 7)' }, markShape(use)),
        series: undefined,
        value: undefined,
        expanded: undefined,
      }),
    ),
  };
}

/** Redundancy of the takes, those first that are checked least, in the worst band. */
export function plannedRedundancy(prediction: Prediction): Figure {
  const takes = takesByRedundancy(prediction);
  const rows = takes.slice(0, MOST_BARS).map(({ label, redundancy, isChecked }) => ({
    name: label,
    values: [isChecked ? redundancy : Number.NaN],
    remark: isChecked ? '' : 'nothing checks it',
  }));
  return {
    name: 'redundancy',
    ...redundancyText(takes, rows.length),
    drawing: valueRows(rows, { title: 'Redundancy: 0 needed to the full, 1 spare', look: 'bars', to: 1 }),
    numbers: {
      columns: ['take', 'pair', 'redundancy', 'smallest shift found, dB'],
      rows: () =>
        takes.map(({ id, pair, redundancy, smallestShift }: PlannedTake) => [
          id,
          pair,
          redundancy.toFixed(3),
          figureText(smallestShift),
        ]),
    },
    legend: [],
  };
}
