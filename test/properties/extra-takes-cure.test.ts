import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { THIRD_UNIT } from '../../src/findings/examination.ts';
import { openFindings } from '../../src/findings/open-findings.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { findPatterns } from '../../src/model/find-patterns.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { type TakeLine, takeSetOf } from '../take-set-of.ts';

const FREQUENCIES = [1000, 1300, 1700];

interface Bench {
  readonly lines: readonly TakeLine[];
  readonly options: ModelOptions;
}

/** Small benches with gaps, mounts of one unit, look-alikes, disconnected parts and up to `paths` paths. */
const bench = (model: 'reciprocal' | 'directional', paths: number): fc.Arbitrary<Bench> =>
  fc
    .record({
      takes: fc.array(
        fc.record({
          pair: fc.constantFrom('AB', 'AC', 'BC', 'CD', 'DE', 'EF', 'AD', 'FA', 'BE', 'AG'),
          mount: fc.constantFrom('', 'bare'),
          path: fc.nat(paths - 1),
          gap: fc.nat(4),
        }),
        { minLength: 1, maxLength: 8 },
      ),
      twins: fc.boolean(),
    })
    .map(({ takes, twins }) => {
      const lines = takes.map(({ pair, mount, path, gap }): TakeLine => {
        const [emitter, receiver] = [pair[0]!, pair[1]!];
        return {
          emitter,
          receiver,
          emitterMount: emitter === 'A' ? mount : '',
          receiverMount: receiver === 'A' ? mount : '',
          path: `p${path}`,
          levels: FREQUENCIES.map((_, f) => (f === gap ? Number.NaN : 0)),
        };
      });
      const named = new Set(lines.flatMap(({ emitter, receiver }) => [emitter, receiver]));
      const lookalikes = twins && named.has('A') && named.has('B') ? [['A', 'B']] : [];
      return { lines, options: { ...DEFAULT_MODEL_OPTIONS, model, lookalikes } };
    });

function examined({ lines, options }: Bench) {
  const set = takeSetOf(FREQUENCIES, lines);
  const model = buildModel(set, options);
  const patterns = findPatterns(set, model);
  const isOpen = (name: string, f: number) => {
    const at = model.links.findIndex((link) => link.name === name);
    return patterns.patterns[patterns.patternOf[f]!]!.separability.status[at] === 'open';
  };
  return { findings: openFindings(set, model, patterns), isOpen, links: model.links.length };
}

type Findings = ReturnType<typeof examined>['findings'];

/** The bench with the extra takes of some findings, at the frequencies that each of them concerns. */
function cured({ lines, options }: Bench, findings: Findings): Bench {
  const extra = findings.flatMap(({ extraTakes, frequencies }) =>
    extraTakes.map(({ emitter, receiver, path }): TakeLine => {
      const [from, emitterMount = ''] = emitter.split('@') as [string, string?];
      const [to, receiverMount = ''] = receiver.split('@') as [string, string?];
      expect(from === to, `${emitter} > ${receiver}`).toBe(false);
      const levels = FREQUENCIES.map((_, f) => (frequencies.includes(f) ? 0 : Number.NaN));
      return { emitter: from, receiver: to, emitterMount, receiverMount, path: path === '' ? 'p0' : path, levels };
    }),
  );
  return { lines: [...lines, ...extra], options };
}

describe('extra takes', () => {
  it('of each open finding of a reciprocal bench settle it by themselves', () => {
    let settled = 0;
    let withThirdUnit = 0;
    fc.assert(
      fc.property(bench('reciprocal', 1), (before) => {
        for (const finding of examined(before).findings) {
          const { isOpen } = examined(cured(before, [finding]));
          expect(finding.extraTakes.length).toBeGreaterThan(0);
          for (const name of finding.responses) {
            for (const f of finding.frequencies) expect(isOpen(name, f), `${name} at ${f}`).toBe(false);
          }
          settled++;
          if (finding.extraTakes.some(({ receiver }) => receiver === THIRD_UNIT)) withThirdUnit++;
        }
      }),
      { seed: 11, numRuns: 80 },
    );
    expect(settled).toBeGreaterThan(120);
    expect(withThirdUnit).toBeGreaterThan(10);
  });

  it('of each open finding of a directional bench settle it by themselves, unless there is but one emitter and one receiver', () => {
    let settled = 0;
    fc.assert(
      fc.property(bench('directional', 1), (before) => {
        const { findings, links } = examined(before);
        if (links <= 2) return;
        for (const finding of findings.filter(({ status, extraTakes }) => status === 'open' && extraTakes.length > 0)) {
          const { isOpen } = examined(cured(before, [finding]));
          for (const name of finding.responses) {
            for (const f of finding.frequencies) expect(isOpen(name, f), `${name} at ${f}`).toBe(false);
          }
          settled++;
        }
      }),
      { seed: 12, numRuns: 80 },
    );
    expect(settled).toBeGreaterThan(100);
  });

  it('over a path settle that path', () => {
    let paths = 0;
    fc.assert(
      fc.property(bench('reciprocal', 3), (before) => {
        const { findings } = examined(before);
        for (const finding of findings.filter(({ kind, status }) => kind === 'path' && status === 'open')) {
          const path = finding.extraTakes[0]!.path;
          const { isOpen } = examined(cured(before, [finding]));
          for (const f of finding.frequencies) expect(isOpen(`path ${path}`, f)).toBe(false);
          paths++;
        }
      }),
      { seed: 13, numRuns: 80 },
    );
    expect(paths).toBeGreaterThan(25);
  });
});
