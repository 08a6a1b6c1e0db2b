import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../model/model-options.ts';
import { InputError, type InputFault } from '../quantity/input-fault.ts';
import { type AssumedBand, assumedBands } from '../whatif/assumed-scatter.ts';
import { type Design, pairKey, seatingOf } from '../whatif/design.ts';
import { designOfRun, lastSeatings } from '../whatif/design-of-run.ts';
import { emptyDesign, patternDesign } from '../whatif/patterns.ts';
import { readDesign } from '../whatif/read-design.ts';
import { fileSource } from './file-source.ts';
import type { Progress } from './progress.ts';
import { repeatRun, runBands } from './repeat-run.ts';
import { UsageError } from './usage-error.ts';
import { missingText, type WhatifRequest } from './whatif-options.ts';

/** What `whatif` starts from. */
export interface WhatifInputs {
  readonly designs: readonly Design[];
  readonly bands: readonly AssumedBand[];
  readonly model: ModelOptions;
  /** Seating numbers that units of an earlier run have. */
  readonly lastSeatings: ReadonlyMap<string, number>;
  readonly notices: readonly string[];
}

/**
 * Reads the designs, or the run they start from, and the scatter to assume.
 * @throws InputError for designs that cannot be used, UsageError for scatter with gaps.
 */
export async function whatifInputs(request: WhatifRequest, progress: Progress): Promise<WhatifInputs> {
  const read = request.from === undefined ? await planned(request) : await fromRun(request, request.from, progress);
  const faults: InputFault[] = [];
  const designs = read.designs.map((design) => constrained(design, request, faults));
  if (faults.length > 0) throw new InputError(faults);
  if (!read.bands.some(({ repeat, reseat, partner }) => repeat + reseat + partner > 0)) {
    throw new UsageError([
      '--repeat-db, --reseat-db, --partner-db: found no scatter at all; expected one of them above 0.',
    ]);
  }
  return { ...read, designs };
}

async function planned(request: WhatifRequest): Promise<WhatifInputs> {
  const { bands, missing } = assumedBands(request.scatter);
  if (missing.length > 0) throw new UsageError(missing.map(({ step, from, to }) => missingText(step, from, to)));
  const { units, seatings, repeats } = request;
  const notices: string[] = [];
  const designs: Design[] = [];
  for (const file of request.designs) {
    const { design, notices: own } = await readDesign(await fileSource(file), { units, seatings, repeats });
    notices.push(...own);
    designs.push(design);
  }
  if (units !== undefined) {
    designs.push(...request.patterns.map((pattern) => patternDesign(units, pattern, { seatings, repeats })));
    if (designs.length === 0) designs.push(emptyDesign(units));
  }
  const model = { ...DEFAULT_MODEL_OPTIONS, model: request.model };
  return { designs, bands, model, lastSeatings: new Map(), notices };
}

async function fromRun(request: WhatifRequest, name: string, progress: Progress): Promise<WhatifInputs> {
  const run = await repeatRun(name, progress);
  const design = designOfRun(name, run.set, run.leftOut);
  const left = run.leftOut.size;
  // New units may join the bench.
  const units = [...new Set([...design.units, ...(request.units ?? [])])];
  return {
    designs: [{ ...design, units }],
    bands: runBands(run, request.scatter, request.band),
    model: request.model === 'auto' ? run.model : { ...run.model, model: request.model },
    lastSeatings: lastSeatings(run.set),
    notices: [
      ...run.notices,
      ...(left === 0 ? [] : [`${left} takes of the run were flagged and left out: they do not count as made.`]),
    ],
  };
}

/** The design with the forbidden pairs and the control takes of the command line. */
function constrained(design: Design, request: WhatifRequest, faults: InputFault[]): Design {
  const fault = (file: string, found: string, expected: string, remedy: string) =>
    faults.push({ place: { file }, found, expected, remedy });
  if (design.units.length < 2) {
    fault(
      design.name,
      design.units.length === 0 ? 'no unit' : `one unit, ${design.units[0]}`,
      'at least two units, and three to tell them apart',
      `The smallest design that works is a triangle: A > B, B > C, A > C, or --units 3 --pattern all.`,
    );
  }
  const known = design.units.slice(0, 12).join(', ');
  const named = [
    ...request.forbidden.map((pair) => ({ option: '--forbid', pair })),
    ...(request.control === undefined ? [] : [{ option: '--control', pair: request.control }]),
  ];
  for (const { option, pair } of named) {
    for (const unit of pair) {
      if (!design.units.includes(unit)) {
        fault(option, `the unit ${unit}, which the design does not have`, `one of ${known}`, 'Check its spelling.');
      }
    }
  }
  const forbidden = [...design.forbidden, ...request.forbidden];
  const keys = new Set(forbidden.map((pair) => pairKey(...pair)));
  for (const { emitter, receiver, kind } of design.seatings) {
    // What was taken already is there, whatever is forbidden from now on.
    if (kind === 'made' || !keys.has(pairKey(emitter, receiver))) continue;
    fault(
      '--forbid',
      `the pair ${emitter} > ${receiver}, which the design ${design.name} plans`,
      'each pair planned or forbidden, not both',
      'Take it out of the design, or out of --forbid.',
    );
  }
  if (request.control === undefined) return { ...design, forbidden };
  const [emitter, receiver] = request.control;
  if (keys.has(pairKey(emitter, receiver))) {
    fault(
      '--control',
      `the pair ${emitter} > ${receiver}, which is forbidden`,
      'a pair that can be taken',
      'Choose another pair for the control takes.',
    );
  }
  const control = seatingOf(emitter, receiver, { repeats: request.repeats, kind: 'control' });
  return { ...design, forbidden, seatings: [...design.seatings, control, control, control] };
}
