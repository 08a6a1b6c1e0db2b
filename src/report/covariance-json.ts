import type { CovarianceBlock } from '../estimate/solution.ts';
import { LINK_STATUS } from '../estimate/solution.ts';
import { jsonFigure } from './json-text.ts';
import { roundedFrequency } from './number-text.ts';
import { responseName } from './response-name.ts';
import type { OutputFile, Result } from './result.ts';

const COVARIANCE_SCHEMA = 'oddloop-covariance/1';

const STATEMENT =
  'At frequency number f of a block, the covariance in dB² of two of its responses is scales_db2[f] × triangle + common_triangle_db2. ' +
  'Triangles hold the rows below and with the diagonal, one after the other; rows and columns are the responses of the block, ' +
  'numbers into the list of responses, counted from 0. Responses that are open in a block are not in it. ' +
  'A scale of null: the readings at that frequency have no uncertainty.';

/** Digits of an entry: more than any use of a covariance needs, so that correlations near 1 keep their difference. */
const DIGITS = 10;

/** `covariance.json`: the covariance among the reported responses, a block of frequencies that share one matrix at a time. */
export function covarianceFile(result: Result): OutputFile {
  return { name: 'covariance.json', chunks: () => covarianceChunks(result) };
}

function* covarianceChunks(result: Result): Iterable<string> {
  const { version, model, solution } = result;
  const names = model.responses.map((response) => ({
    name: responseName(response),
    unit: response.unit,
    mount: response.mount === '' ? null : response.mount,
    role: response.role,
  }));
  const head = { schema: COVARIANCE_SCHEMA, version, statement: STATEMENT };
  yield `${JSON.stringify(head).slice(0, -1)},\n"responses":[\n${names.map((name) => JSON.stringify(name)).join(',\n')}\n],\n"blocks":[`;
  let separator = '\n';
  for (const block of solution.covariance) {
    yield separator + blockText(result, block);
    separator = ',\n';
  }
  yield '\n]}\n';
}

function blockText({ set, model, solution }: Result, block: CovarianceBlock): string {
  const n = model.linksPerFrequency;
  // All frequencies of a block have the same readings, so that the status of a response is the same too.
  const first = block.frequencies[0]!;
  const kept = [...model.responses.keys()].filter(
    (response) => LINK_STATUS[solution.status[first * n + model.responses[response]!.link]!] !== 'open',
  );
  const links = kept.map((response) => model.responses[response]!.link);
  const triangle = (matrix: Float64Array) =>
    links.flatMap((row, i) => links.slice(0, i + 1).map((column) => jsonFigure(matrix[row * n + column]!, DIGITS)));
  const absent = block.scales.filter(Number.isNaN).length;
  return JSON.stringify({
    frequencies_hz: block.frequencies.map((f) => roundedFrequency(set.frequencies[f]!)),
    scales_db2: Array.from(block.scales, (scale) => jsonFigure(scale, DIGITS)),
    status: absent === 0 ? 'available' : absent === block.scales.length ? 'not available' : 'partly available',
    responses: kept,
    triangle: triangle(block.matrix),
    common_triangle_db2: block.common === undefined ? null : triangle(block.common),
  });
}
