/** Reads covariance.json as its own statement explains it. */
import type { Solved } from './solve-folder.ts';

interface Block {
  readonly frequencies_hz: readonly number[];
  readonly scales_db2: readonly (number | null)[];
  /** Numbers into the list of responses. */
  readonly responses: readonly number[];
  readonly triangle: readonly number[];
  readonly common_triangle_db2: readonly number[] | null;
}

interface Covariances {
  readonly responses: readonly { readonly name: string }[];
  readonly blocks: readonly Block[];
}

/** Covariance in dB^2 of two responses by name (`A`, or `A emit`) at a frequency; NaN where there is none. */
export const covarianceAt = (solved: Solved, frequency: number) => {
  const { responses, blocks } = JSON.parse(solved.text('covariance.json') ?? '{}') as Covariances;
  const block = blocks.find((candidate) => candidate.frequencies_hz.includes(frequency));
  return (one: string, other: string): number => {
    if (!block) return Number.NaN;
    const scale = block.scales_db2[block.frequencies_hz.indexOf(frequency)] ?? Number.NaN;
    const place = (name: string) => block.responses.findIndex((index) => responses[index]?.name === name);
    const [low, high] = [place(one), place(other)].sort((a, b) => a - b);
    if (low === undefined || high === undefined || low < 0) return Number.NaN;
    const at = (high * (high + 1)) / 2 + low;
    return scale * block.triangle[at]! + (block.common_triangle_db2?.[at] ?? 0);
  };
};
