import type { OpenFinding } from '../findings/examination.ts';
import { openSentence } from '../report/open-wording.ts';
import { wrapped } from '../report/text-layout.ts';

/** Findings told in the message; the rest are in the outputs. */
const MOST_FINDINGS = 5;

/** The message of a run that ends with not a single level: which units are open, and which takes would settle them. */
export function nothingApart(open: readonly OpenFinding[], frequencies: Float64Array): string {
  const sentences = open.slice(0, MOST_FINDINGS).map((finding) => openSentence(finding, frequencies));
  const more = open.length - sentences.length;
  if (more > 0) sentences.push(`${more} more of this kind: see the summary.`);
  const lines = sentences.flatMap((sentence) => wrapped(sentence, { indent: '  ' }));
  return ['Nothing can be told apart: not a single response has a level.', ...lines].join('\n');
}
