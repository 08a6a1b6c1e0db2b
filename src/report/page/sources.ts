import { list } from './blocks.ts';

/** What the figures rest on; the equations are named beside them in the program's own documentation. */
const SOURCES: readonly string[] = [
  'Uncertainty: JCGM 100:2008, with Welch–Satterthwaite degrees of freedom.',
  'What can be told apart: the graph of the pairs (Cvetković, Rowlinson, Simić 2007).',
  'Takes that disagree: Baarda 1968; corrected for their number by Holm 1979; what they read like: Schwarz 1978.',
  'Bands: IEC 61260-1:2014.',
];

export function sourceList(): string {
  return `<h3>Sources</h3>${list(SOURCES)}`;
}
