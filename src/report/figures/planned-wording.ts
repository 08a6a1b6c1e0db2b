/** Titles, text alternatives and notes of the pictures of a design. */
import type { BandPrediction } from '../../whatif/predict.ts';
import { figureText, stretchText, unitText } from '../whatif-wording.ts';
import { counted, FEW_NAMES, listText } from '../wording.ts';
import type { Figure } from './figure.ts';
import type { Network } from './network-layout.ts';
import type { PlannedTake } from './planned-takes.ts';

type Texts = Pick<Figure, 'title' | 'description' | 'notes'>;

export function plannedText({ nodes, edges, missing, parts, isDirected }: Network, takes: number): Texts {
  const open = nodes.filter(({ isOpen }) => isOpen).map(({ name }) => name);
  const names = missing.map(([a, b]) => `${nodes[a]!.name} with ${nodes[b]!.name}`);
  const notes = [
    ...(parts > 1 ? [`The units are in ${parts} parts that no take connects.`] : []),
    missing.length === 0
      ? `Every pair${parts > 1 ? ' within a part' : ''} is planned.`
      : `${counted(missing.length, 'pair')} of connected units ${missing.length === 1 ? 'is' : 'are'} not planned${missing.length <= FEW_NAMES ? `: ${listText(names)}` : ''}.`,
  ];
  const sentences = [
    `${counted(nodes.length, 'unit')} and ${counted(edges.length, isDirected ? 'directed pair' : 'pair')} between them, in ${counted(takes, 'take')}.`,
    ...notes,
    ...(open.length > 0 ? [`Without a level: ${listText(open, FEW_NAMES)}.`] : []),
  ];
  return { title: 'Who will be measured against whom', description: sentences.join(' '), notes };
}

export function predictedText({ units, scatter }: BandPrediction): Texts {
  const told = units.filter(({ status }) => status !== 'open');
  const open = units.filter(({ status }) => status === 'open').map(unitText);
  const range = (values: readonly number[]) => {
    const [low, high] = [figureText(Math.min(...values)), figureText(Math.max(...values))];
    return low === high ? `${low} dB` : `${low} to ${high} dB`;
  };
  const sentences = [
    ...(told.length === 0
      ? ['No unit has a level.']
      : [
          `u as seated: ${range(told.map(({ asSeated }) => asSeated))}; seated again: ${range(told.map(({ reseated }) => reseated))}; on another partner: ${range(told.map(({ otherPartner }) => otherPartner))}.`,
        ]),
    ...(open.length > 0 && told.length > 0 ? [`Without a level: ${listText(open, FEW_NAMES)}.`] : []),
  ];
  const where = Number.isNaN(scatter.from) ? '' : `, ${stretchText(scatter)}`;
  return {
    title: `Predicted uncertainty of each unit${where}`,
    description: sentences.join(' '),
    notes: where === '' ? [] : ['The band with the largest uncertainty is drawn; the numbers have all bands.'],
  };
}

export function redundancyText(takes: readonly PlannedTake[], shown: number): Texts {
  const unchecked = takes.filter(({ isChecked }) => !isChecked);
  const checked = takes.filter(({ isChecked }) => isChecked).map(({ redundancy }) => redundancy);
  const sentences = [
    unchecked.length === 0
      ? 'Every take is checked by others.'
      : `Nothing checks ${unchecked.length} of ${counted(takes.length, 'take')}: ${listText(
          unchecked.map(({ label }) => label),
          FEW_NAMES,
        )}.`,
    ...(checked.length === 0
      ? []
      : [
          `Redundancy${unchecked.length === 0 ? '' : ' of the others'} from ${Math.min(...checked).toFixed(2)} to ${Math.max(...checked).toFixed(2)}.`,
        ]),
  ];
  return {
    title: 'Redundancy of each take',
    description: sentences.join(' '),
    notes:
      shown < takes.length
        ? [`The ${shown} takes that are checked least, of ${takes.length}; the numbers have all of them.`]
        : [],
  };
}
