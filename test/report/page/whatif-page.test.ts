import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { whatifPage } from '../../../src/report/page/whatif-page.ts';
import type { WhatifResult } from '../../../src/report/whatif-result.ts';
import { asMounted } from '../../../src/whatif/as-mounted.ts';
import { DEFAULT_TIMES } from '../../../src/whatif/costs.ts';
import type { Design } from '../../../src/whatif/design.ts';
import { orderSeatings } from '../../../src/whatif/order.ts';
import { patternDesign } from '../../../src/whatif/patterns.ts';
import { predict } from '../../../src/whatif/predict.ts';
import { ladder } from '../../whatif/designs-made.ts';
import { textOf } from '../example-results.ts';

const HOSTILE = '<img src=x onerror="alert(1)">';
const ONCE = { seatings: 1, repeats: 1 };

/** Designs in one band, the last of them in the order of its run. */
async function planned(designs: readonly Design[], more: Partial<WhatifResult> = {}): Promise<WhatifResult> {
  const last = designs.at(-1)!;
  const ordered = orderSeatings(last.seatings, 1);
  const due = { ...last, seatings: asMounted(ordered.seatings, new Map()) };
  const predictions = [];
  for (const design of [...designs.slice(0, -1), due]) {
    predictions.push(await predict(design, [ladder(0.1, 0.5, 0.3)], { times: DEFAULT_TIMES }));
  }
  return {
    version: '1.2.3',
    settings: {},
    predictions,
    suggested: undefined,
    ordered,
    sheet: undefined,
    rehearsal: undefined,
    times: DEFAULT_TIMES,
    timesAreAssumed: true,
    effect: undefined,
    coverage: 0.95,
    notices: [],
    ...more,
  };
}

const pageOf = (result: WhatifResult) => textOf(whatifPage(result));
const sectionOf = (page: string, id: string) => page.split(`<section id="${id}"`)[1]!.split('</section>')[0]!;
const SIX = ['A', 'B', 'C', 'D', 'E', 'F'];

describe('the page of whatif', () => {
  it('has its sections in order, the run sheet only where the takes have an order', async () => {
    const result = await planned([patternDesign(SIX, 'all', ONCE)]);
    const titles = (page: string) => [...page.matchAll(/<h2[^>]*>([^<]*)<\/h2>/g)].map(([, title]) => title);
    const all = [
      'Verdict',
      'Designs side by side',
      'The bench',
      'Predicted uncertainty per unit',
      'Redundancy per take',
      'Run sheet',
      'How it was made',
    ];
    expect(titles(pageOf(result))).toEqual(all);
    expect(titles(pageOf({ ...result, ordered: undefined }))).toEqual(all.filter((title) => title !== 'Run sheet'));
  });

  it('runs and fetches nothing: no script, and a policy that allows its own style only', async () => {
    const page = pageOf(await planned([patternDesign(SIX, 'all', ONCE)]));
    expect(page).not.toContain('<script');
    expect(page).not.toMatch(/ (?:style|on\w+)=|https?:/);
    const style = /<style>([\s\S]*?)<\/style>/.exec(page)![1]!;
    const hash = createHash('sha256').update(style).digest('base64');
    const policy = /Content-Security-Policy" content="([^"]*)"/.exec(page)![1]!.replaceAll('&#39;', "'");
    expect(policy).toBe(`default-src 'none'; style-src 'sha256-${hash}'; base-uri 'none'; form-action 'none'`);
  });

  it('draws a mark for each use of each unit and a bar for each take, and has a row and a box for each', async () => {
    const result = await planned([patternDesign(SIX, 'all', ONCE)]);
    const page = pageOf(result);
    const count = (text: string, sign: string) => text.split(sign).length - 1;
    const [units, takes] = [sectionOf(page, 'units'), sectionOf(page, 'takes')];
    expect(count(units.split('<ul class="legend">')[0]!, 'class="use-')).toBe(3 * 6);
    expect(count(units, '<tr><th scope="row">')).toBe(6);
    expect(count(takes, '<rect x="0"')).toBe(15);
    expect(count(takes, '<tr><th scope="row">')).toBe(15);
    expect(count(sectionOf(page, 'run'), '\u2610')).toBe(15);
    const redundancy = result.predictions[0]!.bands[0]!.takes.map((take) => take.redundancy);
    expect(takes).toContain(`from ${Math.min(...redundancy).toFixed(2)} to ${Math.max(...redundancy).toFixed(2)}`);
  });

  it('lists the takes that are checked least first, and equals in the order of the design', async () => {
    const result = await planned([patternDesign(SIX, 'hub', { seatings: 2, repeats: 1 })]);
    const rows = sectionOf(pageOf(result), 'takes').matchAll(
      /<th scope="row">(T\d+)<\/th>.*?<td class="number">([\d.]+)/g,
    );
    const shown = [...rows].map(([, id = '', redundancy = '']) => `${redundancy} ${id}`);
    expect(shown).toHaveLength(12);
    expect(new Set(shown.map((text) => text.split(' ')[0])).size).toBeGreaterThan(1);
    expect(shown).toEqual([...shown].sort());
  });

  it('names units without a level and takes that nothing checks, and draws no value for them', async () => {
    const ring = patternDesign(['A', 'B', 'C', 'D'], 'ring', ONCE);
    const page = pageOf(await planned([{ ...ring, units: [...ring.units, 'Z'] }]));
    expect(sectionOf(page, 'units')).not.toContain('class="use-0" d=');
    expect(sectionOf(page, 'units')).toContain('No unit has a level.');
    expect(sectionOf(page, 'bench')).toContain('Z (open)');
    const chain = pageOf(await planned([patternDesign(['A', 'B', 'C'], 'all', ONCE)]));
    expect(sectionOf(chain, 'takes')).toContain('nothing checks it');
    expect(sectionOf(chain, 'takes')).not.toContain('<rect x="0"');
  });

  it('sets designs side by side and says which is best', async () => {
    const page = pageOf(await planned([patternDesign(SIX, 'hub', ONCE), patternDesign(SIX, 'all', ONCE)]));
    const designs = sectionOf(page, 'designs');
    expect(designs).toContain('>hub, 6 units</th>');
    expect(designs).toMatch(/u typical, dB<\/th><td class="number">[\d.]+<\/td><td class="number"><b>[\d.]+ \(best\)/);
  });

  it('writes whatever a user wrote as text, and the same result as the same bytes', async () => {
    const units = [`A${HOSTILE}`, `B</style>${HOSTILE}`, 'C</script><script>alert(2)</script>', 'D'];
    const design = { ...patternDesign(units, 'all', { seatings: 2, repeats: 1 }), name: HOSTILE };
    const more = { notices: [HOSTILE], settings: { file: HOSTILE } };
    const result = await planned([design, design], more);
    const page = pageOf(result);
    expect(page).not.toMatch(/<img|<script|alert\(2\)<\/script/);
    expect(page).toContain('&lt;img src=x onerror=&quot;');
    expect(page.split('</style>')).toHaveLength(2);
    expect(pageOf(await planned([design, design], more))).toBe(page);
  });
});
