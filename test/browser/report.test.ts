import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import axe from 'axe-core';
import type { Browser, Locator, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { runOddloop } from '../command/run-oddloop.ts';
import { mayRun, openPage, startBrowser } from './open-page.ts';

/** A page of A4 with a picture on each and a table or two. */
const FEWEST_PAGES = 8;
const MOST_PAGES = 18;

const figureOf = (page: Page, name: string) => page.locator(`#figure-${name}`);
const labelsOf = (figure: Locator) => figure.locator('.x-axis text').allTextContents();

describe.runIf(mayRun())('report.html in a browser', () => {
  let folder = '';
  let report = '';
  let browser: Browser;
  beforeAll(async () => {
    folder = mkdtempSync(join(tmpdir(), 'oddloop-browser-'));
    const { code, stderr } = await runOddloop(['demo', '--quiet'], { cwd: folder });
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' });
    report = join(folder, 'oddloop-demo/result/report.html');
    browser = await startBrowser();
  }, 120_000);
  afterAll(async () => {
    await browser?.close();
    rmSync(folder, { recursive: true, force: true });
  });

  it('opens with every section, without an error and without a request', async () => {
    const { page, troubles } = await openPage(browser, report);
    expect(await page.locator('section > h2').count()).toBe(11);
    for (const link of await page.locator('nav a').all()) {
      expect(await page.locator((await link.getAttribute('href'))!).count()).toBe(1);
    }
    expect(troubles).toEqual([]);
    await page.context().close();
  });

  it.each([400, 1000, 1600])(
    'does not scroll sideways at %i pixels, and lets no label stand outside',
    async (width) => {
      const { page } = await openPage(browser, report, { width });
      const widths = await page.evaluate(() => ({
        all: document.documentElement.scrollWidth,
        seen: document.documentElement.clientWidth,
        right: Math.max(
          ...[...document.querySelectorAll('svg text')].map((text) => text.getBoundingClientRect().right),
        ),
      }));
      expect(widths.all).toBe(widths.seen);
      expect(widths.right).toBeLessThanOrEqual(width);
      await page.context().close();
    },
  );

  it('has no labels of an axis over each other, at any width', async () => {
    for (const width of [400, 1600]) {
      const { page } = await openPage(browser, report, { width });
      const meeting = await page.evaluate(() =>
        [...document.querySelectorAll('svg.plot')].flatMap((plot) => {
          const boxes = [...plot.querySelectorAll('.tick, .end-labels text')]
            .map((text) => ({ text: text.textContent, box: text.getBoundingClientRect() }))
            .filter(({ box }) => box.width > 0);
          return boxes.flatMap((a, k) =>
            boxes
              .slice(k + 1)
              .filter(
                (b) =>
                  a.box.left < b.box.right &&
                  b.box.left < a.box.right &&
                  // Boxes of letters reach above and below the letters themselves.
                  a.box.top + 3 < b.box.bottom - 3 &&
                  b.box.top + 3 < a.box.bottom - 3,
              )
              .map((b) => `${a.text} on ${b.text}`),
          );
        }),
      );
      expect(meeting, `${width} pixels`).toEqual([]);
      await page.context().close();
    }
  });

  it('zooms all pictures over the same frequencies together, by buttons and by the wheel with Ctrl, and back', async () => {
    const { page, troubles } = await openPage(browser, report);
    const figure = figureOf(page, 'responses');
    const whole = await labelsOf(figure);
    const before = await figure.locator('.inner').getAttribute('viewBox');
    await figure.getByRole('button', { name: 'Zoom in along frequency' }).click();
    expect(await labelsOf(figure)).not.toEqual(whole);
    expect(await labelsOf(figureOf(page, 'residuals'))).toEqual(await labelsOf(figure));
    await figure.getByRole('button', { name: 'Whole range' }).click();
    expect(await labelsOf(figure)).toEqual(whole);
    expect(await figure.locator('.inner').getAttribute('viewBox')).toBe(before);
    await figure.locator('svg.plot').hover();
    await page.mouse.wheel(0, -300);
    expect(await figure.locator('.inner').getAttribute('viewBox')).toBe(before);
    await figure.locator('svg.plot').hover();
    await page.keyboard.down('Control');
    await page.mouse.wheel(0, -300);
    await page.keyboard.up('Control');
    await expect.poll(() => figure.locator('.inner').getAttribute('viewBox')).not.toBe(before);
    expect(troubles).toEqual([]);
    await page.context().close();
  });

  it('reads out every unit with its U at the cursor, by pointer and by keyboard, as the table has it', async () => {
    const { page } = await openPage(browser, report);
    const figure = figureOf(page, 'responses');
    const slider = figure.getByRole('slider');
    await slider.focus();
    for (let step = 0; step < 5; step++) await page.keyboard.press('ArrowRight');
    const row = readFileSync(join(folder, 'oddloop-demo/result/responses.csv'), 'utf8').split('\n')[6]!.split(',');
    const [unit, , , frequency, level, , , expanded] = row as [
      string,
      string,
      string,
      string,
      string,
      string,
      string,
      string,
    ];
    const value = (await figure.locator('.legend li').first().locator('.value').textContent())!.replace('\u2212', '-');
    expect(await figure.locator('.legend li').first().locator('.name').textContent()).toBe(unit);
    expect(await figure.locator('.tools output').textContent()).toBe(`${Number(frequency) / 1000} kHz`);
    const [shown, u] = /^(\S+) \u00b1 (\S+) dB$/.exec(value)!.slice(1).map(Number) as [number, number];
    // Rounded to two digits of U: at most half of the last one.
    expect(Math.abs(shown - Number(level))).toBeLessThanOrEqual(0.00501 * 10 ** Math.ceil(Math.log10(u)));
    expect(Math.abs(u - Number(expanded))).toBeLessThanOrEqual(0.0501 * Number(expanded));
    expect(await slider.getAttribute('aria-valuetext')).toContain(`${unit} ${value.replace('-', '\u2212')}`);
    const box = (await figure.locator('svg.plot').boundingBox())!;
    await page.mouse.move(box.x + box.width / 2, box.y + box.height / 2);
    expect(await figure.locator('.tools output').textContent()).not.toBe(`${Number(frequency) / 1000} kHz`);
    await page.context().close();
  });

  it('shows and hides units from the legend, one and all', async () => {
    const { page } = await openPage(browser, report);
    const figure = figureOf(page, 'responses');
    const first = figure.locator('.legend button').first();
    const curve = figure.locator('.inner .series-0');
    expect(await curve.isVisible()).toBe(true);
    await first.focus();
    await page.keyboard.press('Enter');
    expect([await curve.isVisible(), await first.getAttribute('aria-pressed')]).toEqual([false, 'false']);
    expect(await figure.locator('.end-labels .series-0').isVisible()).toBe(false);
    await figure.getByRole('button', { name: 'Hide all' }).click();
    expect(await figure.locator('.legend button[aria-pressed=true]').count()).toBe(0);
    await figure.getByRole('button', { name: 'Show all' }).click();
    expect(await curve.isVisible()).toBe(true);
    await page.context().close();
  });

  it('tells take, frequency, residual and u of a cell, and leads from a flagged take to its picture', async () => {
    const { page } = await openPage(browser, report);
    const figure = figureOf(page, 'residuals');
    const [take, frequency] = [figure.getByRole('slider').first(), figure.getByRole('slider').last()];
    await take.fill('129');
    await frequency.fill('3');
    const residual = readFileSync(join(folder, 'oddloop-demo/result/residuals.csv'), 'utf8')
      .split('\n')
      .filter((line) => line.startsWith('T130,'))[3]!
      .split(',');
    const text = (await figure.locator('.tools output').textContent())!;
    expect(text).toMatch(/^T130 \(N06 > N09\), [\d.]+ kHz: residual [+−][\d.]+ dB, u [\d.]+ dB$/);
    const shown = Number(/residual (\S+) dB/.exec(text)![1]!.replace('\u2212', '-'));
    // Two decimals.
    expect(Math.abs(shown - Number(residual[6]))).toBeLessThanOrEqual(0.00501);
    await figure.getByRole('link', { name: 'T130' }).click();
    expect(new URL(page.url()).hash).toBe('#take-T130');
    expect(await page.locator('#take-T130').textContent()).toContain('moved gain');
    await page.context().close();
  });

  it('turns the numbers of a picture into a table with a row a frequency', async () => {
    const { page } = await openPage(browser, report);
    const figure = figureOf(page, 'responses');
    await figure.getByText('Numbers', { exact: true }).click();
    expect(await figure.locator('table thead th').count()).toBe(1 + 2 * 10);
    expect(await figure.locator('table tbody tr').count()).toBe(120);
    expect(await figure.getByRole('button', { name: 'Copy' }).isVisible()).toBe(true);
    await page.context().close();
  });

  it('without its program shows the same pictures, and the numbers as text', async () => {
    const { page, troubles } = await openPage(browser, report, { javaScriptEnabled: false });
    const figure = page.locator('#figure-responses');
    expect(await figure.locator('svg.plot').isVisible()).toBe(true);
    await figure.getByText('Numbers', { exact: true }).click();
    expect(await figure.locator('pre').textContent()).toMatch(/^"frequency, Hz","N01, dB"/);
    expect(troubles).toEqual([]);
    await page.context().close();
  });

  it.each(['light', 'dark'] as const)('is accessible in %s: nothing serious by axe', async (colorScheme) => {
    const { page } = await openPage(browser, report, { colorScheme });
    // The page's policy lets no program in; the tester's comes through the debugger.
    await page.evaluate(axe.source);
    const found = await page.evaluate(async () => {
      const { axe: tester } = globalThis as unknown as { axe: typeof axe };
      return (await tester.run()).violations.map(({ id, impact, nodes }) => ({ id, impact, at: nodes[0]?.html }));
    });
    expect(found.filter(({ impact }) => impact === 'serious' || impact === 'critical')).toEqual([]);
    await page.context().close();
  });

  it('prints to pages of A4 with the pictures and without the tools', async () => {
    const { page } = await openPage(browser, report);
    const pdf = (await page.pdf({ preferCSSPageSize: true })).toString('latin1');
    const pages = pdf.match(/\/Type\s*\/Page\b/g)?.length ?? 0;
    expect(pages).toBeGreaterThanOrEqual(FEWEST_PAGES);
    expect(pages).toBeLessThanOrEqual(MOST_PAGES);
    // 210 mm × 297 mm in points, to the point.
    expect(pdf).toMatch(/\/MediaBox\s*\[0 0 59[45](?:\.\d+)? 84[12](?:\.\d+)?\]/);
    await page.emulateMedia({ media: 'print' });
    expect(await page.locator('.tools:visible, nav:visible, .numbers:visible').count()).toBe(0);
    await page.context().close();
  });

  it('has pictures as files that a strict reader takes for SVG', async () => {
    const { page } = await openPage(browser, report);
    const pictures = join(folder, 'oddloop-demo/result/figures');
    const names = readdirSync(pictures);
    expect(names).toEqual(expect.arrayContaining(['network.svg', 'responses.svg', 'residuals.svg', 'take-T130.svg']));
    for (const name of names) {
      const wrong = await page.evaluate(
        (text) => {
          const parsed = new DOMParser().parseFromString(text, 'image/svg+xml');
          return parsed.querySelector('parsererror')?.textContent ?? '';
        },
        readFileSync(join(pictures, name), 'utf8'),
      );
      expect(wrong, name).toBe('');
    }
    await page.context().close();
  });

  it('runs nothing that stands in the names of units, notes or files', async () => {
    const evil = '<img src=x onerror=alert(1)>';
    const rows = [
      ['A', 'B', 1],
      ['B', 'C', 2],
      ['A', 'C', 3],
      ['A', 'D', 4],
      ['B', 'D', 5],
    ].flatMap(([one, other, level]) =>
      [100, 200].map((f) => `"${one}${evil}","${other}${evil}",${f},${level}.5,"</script>${evil}"`),
    );
    writeFileSync(join(folder, 'x<b>.csv'), `emitter,receiver,frequency_hz,level_db,note\n${rows.join('\n')}\n`);
    const { code } = await runOddloop(['solve', 'x<b>.csv', '--model', 'reciprocal', '--out', 'evil', '--quiet'], {
      cwd: folder,
    });
    expect(code).toBe(0);
    const { page, troubles } = await openPage(browser, join(folder, 'evil/report.html'));
    for (const summary of await page.locator('summary').all()) await summary.click();
    await page.locator('#figure-responses').getByRole('slider').focus();
    expect(await page.locator('img').count()).toBe(0);
    expect(await page.locator('.legend .name').allTextContents()).toContain(`A${evil}`);
    expect(troubles).toEqual([]);
    await page.context().close();
  });
});
