import { createHash } from 'node:crypto';
import { beforeAll, describe, expect, it } from 'vitest';
import { pageFiles } from '../../../src/report/page/page-files.ts';
import type { OutputFile, Result } from '../../../src/report/result.ts';
import { ISLANDS, resultOf, SHIFTED, textOf } from '../example-results.ts';
import { FLAGGED, judgedResult } from '../judged-results.ts';

const SCRIPT = 'const end = "</script>";';
const HOSTILE = '<img src=x onerror="alert(1)">';

const pageOf = (result: Result, script = SCRIPT) => textOf(pageFiles(result, script)[0]!);
const names = (files: readonly OutputFile[]) => files.map(({ name }) => name);

/** A result whose every text is somebody's attack. */
async function hostileResult(): Promise<Result> {
  const lines = SHIFTED.lines.map((line) => ({
    ...line,
    emitter: `${line.emitter}${HOSTILE}`,
    receiver: `${line.receiver}${HOSTILE}`,
  }));
  const input = {
    files: [{ name: `${HOSTILE}.csv`, layout: 'long' as const, sha256: 'ab'.repeat(32), bytes: 1, rows: 1 }],
    notices: [HOSTILE, '</script><script>alert(2)</script>', 'bell \u0007 and \u202e turned'],
  };
  const result = await judgedResult({ ...SHIFTED, lines, input }, [FLAGGED]);
  return { ...result, settings: { files: [HOSTILE], note: '</style>' } };
}

describe('report.html', () => {
  let page = '';
  beforeAll(async () => {
    page = pageOf(await judgedResult(SHIFTED, [FLAGGED]));
  });

  it('has its sections in the order of the questions they answer', () => {
    const titles = [...page.matchAll(/<h2[^>]*>([^<]*)<\/h2>/g)].map(([, title]) => title);
    expect(titles).toEqual([
      'Verdict',
      'The bench',
      'Responses',
      'Where it holds',
      'Scatter',
      'Disagreement',
      'Flagged takes',
      'Loops',
      'Uncertainty',
      'Next takes',
      'How it was made',
    ]);
  });

  it('is held to itself: its policy forbids every fetch, and names style and program by their hashes', () => {
    const policy = /Content-Security-Policy" content="([^"]*)"/.exec(page)![1]!.replaceAll('&#39;', "'");
    const hash = (text: string) => `'sha256-${createHash('sha256').update(text).digest('base64')}'`;
    const style = /<style>([\s\S]*?)<\/style>/.exec(page)![1]!;
    const program = /<script>([\s\S]*?)<\/script>/.exec(page)![1]!;
    expect(program).toBe('const end = "<\\/script>";');
    expect(policy).toBe(
      `default-src 'none'; style-src ${hash(style)}; script-src ${hash(program)}; base-uri 'none'; form-action 'none'`,
    );
    // A policy of hashes leaves no room for styles or programs in attributes.
    expect(page).not.toMatch(/<[^>]+\s(?:style|on\w+)=/);
    expect(page).not.toMatch(/https?:|url\((?!#)/);
  });

  it('stands without its program: pictures, notes and numbers are in the page, and nothing asks for a program', async () => {
    const still = pageOf(await judgedResult(SHIFTED, [FLAGGED]), '');
    expect(still).not.toMatch(/<script>|script-src/);
    expect(still.match(/<figure/g)).toEqual(page.match(/<figure/g));
    expect(still).toMatch(/<pre[^>]*>frequency, Hz|<pre[^>]*>&quot;frequency, Hz/);
  });

  it('has a text alternative, a title and numbers for every picture', () => {
    const figures = [...page.matchAll(/<figure id="figure-([\w-]+)"[\s\S]*?<\/figure>/g)];
    expect(figures.length).toBeGreaterThanOrEqual(5);
    for (const [text, name] of figures) {
      expect(text, name).toContain(`id="${name}-title"`);
      expect(/class="unseen" id="[\w-]+-text">([^<]*)</.exec(text)![1]!.length, name).toBeGreaterThan(20);
      expect(text, name).toContain('<summary>Numbers</summary>');
    }
  });

  it('gives no id twice', () => {
    const ids = [...page.matchAll(/\sid="([^"]*)"/g)].map(([, id]) => id);
    const twice = ids.filter((id, at) => ids.indexOf(id) !== at);
    expect(twice).toEqual([]);
  });

  it('never shows a number where there is none', () => {
    expect(page.replace(/<style>[\s\S]*?<\/style>/, '')).not.toMatch(/NaN|undefined|Infinity|>null</);
  });

  it('leads from the flagged take in the pictures to its own', () => {
    expect(page).toContain('href="#take-T001"');
    expect(page).toContain('id="take-T001"');
  });

  it('shows what is open as open, and no curve for it', async () => {
    const result = await resultOf(ISLANDS);
    const open = pageOf(result);
    expect(open).toMatch(/class="node open"/);
    expect(open).toContain('yonder (open)');
    expect(open).toContain('2 parts that no take connects');
    expect(open.replace(/<style>[\s\S]*?<\/style>/, '')).not.toMatch(/NaN|undefined|Infinity/);
  });

  it('takes no text of the user for markup, and no control character into the page', async () => {
    const hostile = await hostileResult();
    for (const text of [pageOf(hostile), ...pageFiles(hostile, SCRIPT).slice(1).map(textOf)]) {
      expect(text).not.toMatch(/<img|<script>alert|onerror="/);
      for (const character of ['\u0007', '\u202e']) expect(text).not.toContain(character);
    }
    expect(pageOf(hostile)).toContain('&lt;img src=x onerror=&quot;alert(1)&quot;&gt;');
    expect(pageOf(hostile).match(/<\/style>/g)).toHaveLength(1);
  });
});

describe('pictures as files', () => {
  it('are the pictures of the page, each with a title, a description and a style of its own', async () => {
    const files = pageFiles(await judgedResult(SHIFTED, [FLAGGED]), '');
    expect(names(files)).toEqual(
      expect.arrayContaining(['report.html', 'figures/network.svg', 'figures/responses.svg', 'figures/take-T001.svg']),
    );
    for (const file of files.slice(1)) {
      const svg = textOf(file);
      expect(svg, file.name).toMatch(/^<svg xmlns="http:\/\/www.w3.org\/2000\/svg" width="\d+" height="\d+"/);
      expect(svg, file.name).toMatch(/<title>[^<]+<\/title><desc>[^<]+<\/desc><style>/);
      expect(svg, file.name).not.toMatch(/NaN|undefined/);
    }
  });

  it('are the same bytes for the same result', async () => {
    const [one, other] = [pageFiles(await resultOf(SHIFTED), SCRIPT), pageFiles(await resultOf(SHIFTED), SCRIPT)];
    expect(one.map(textOf)).toEqual(other.map(textOf));
  });
});
