import type { LoopBand, LoopFinding, LoopTerm } from '../findings/loops.ts';
import { type Column, csvFile } from './csv-file.ts';
import { figureCell, frequencyCell, levelCell } from './number-text.ts';
import type { OutputFile } from './result.ts';

interface LoopRow {
  readonly loop: string;
  readonly chain: string;
  readonly band: LoopBand;
}

/** Decimal places of the standardised closure, a plain number of the order of 1. */
const STANDARDISED_PLACES = 4;

const COLUMNS: readonly Column<LoopRow>[] = [
  { name: 'loop', text: ({ loop }) => loop },
  { name: 'chain', text: ({ chain }) => chain },
  { name: 'band_from_hz', text: ({ band }) => frequencyCell(band.from) },
  { name: 'band_to_hz', text: ({ band }) => frequencyCell(band.to) },
  { name: 'closure_db', text: ({ band }) => levelCell(band.closure) },
  { name: 'u_db', text: ({ band }) => figureCell(band.uncertainty) },
  { name: 'standardised', text: ({ band }) => standardisedCell(band) },
];

/** `loops.csv`: how well each loop closes, band by band. */
export function loopsTable(loops: readonly LoopFinding[]): OutputFile {
  const digits = Math.max(2, String(loops.length).length);
  return csvFile('loops.csv', COLUMNS, function* () {
    for (const [k, { chain, bands }] of loops.entries()) {
      const row = { loop: `L${String(k + 1).padStart(digits, '0')}`, chain: loopText(chain) };
      for (const band of bands) yield { ...row, band };
    }
  });
}

/** `N01>N02 - N02>N03 + …`, with a 2 before a pair that is walked twice; path and session where they are told apart. */
export function loopText(chain: readonly LoopTerm[]): string {
  return chain
    .map(({ emitter, receiver, path, session, sign, factor }, k) => {
      const told = [path, session].filter((label) => label !== '').join(', ');
      const pair = `${factor === 1 ? '' : `${factor} `}${emitter}>${receiver}${told === '' ? '' : ` (${told})`}`;
      const before = k === 0 ? (sign > 0 ? '' : '-') : sign > 0 ? ' + ' : ' - ';
      return `${before}${pair}`;
    })
    .join('');
}

// Readings without any scatter have an uncertainty of 0, by which nothing can be divided.
function standardisedCell({ standardised }: LoopBand): string {
  return Number.isFinite(standardised) ? levelCell(standardised, STANDARDISED_PLACES) : '';
}
