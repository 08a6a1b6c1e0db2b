import { createHash } from 'node:crypto';
import { describe, expect, test } from 'vitest';
import type { Source } from '../../src/readings/source.ts';
import { textBlocks } from '../../src/readings/text-blocks.ts';
import { type Content, faultsOf, memorySource } from './memory-source.ts';

async function textOf(source: Source) {
  const blocks = textBlocks(source, () => {});
  const texts: string[] = [];
  let step = await blocks.next();
  for (; !step.done; step = await blocks.next()) texts.push(step.value);
  return { texts, digest: step.value };
}

describe('text', () => {
  test.each([1, 2, 3, 7, 1000])('pieces of %i bytes make the same text, in whole lines', async (piece) => {
    const text = 'Gerät µ,1\r\nzwei\nthree 𝛼\n\nend';
    const { texts, digest } = await textOf(memorySource('x', text, {}, piece));
    expect(texts.join('')).toBe(text);
    for (const block of texts.slice(0, -1)) expect(block.endsWith('\n')).toBe(true);
    const bytes = new TextEncoder().encode(text);
    expect(digest).toEqual({ bytes: bytes.length, sha256: createHash('sha256').update(bytes).digest('hex') });
  });

  test('carriage returns alone end lines, and CRLF is never torn apart', async () => {
    const { texts } = await textOf(memorySource('x', 'a\rb\rc\r', {}, 2));
    expect(texts.join('')).toBe('a\rb\rc\r');
    const crlf = await textOf(memorySource('x', 'a\r\nb\r\n', {}, 2));
    expect(crlf.texts.join('|')).toBe('a\r\n|b\r\n');
  });

  test('a byte-order mark is taken away', async () => {
    expect((await textOf(memorySource('x', '\uFEFFa\n'))).texts).toEqual(['a\n']);
  });

  const utf16 = Buffer.concat([Buffer.from([0xff, 0xfe]), Buffer.from('a,b\n', 'utf16le')]);
  test.each<[string, Content, RegExp]>([
    ['UTF-16', utf16, /UTF-16/],
    ['UTF-16 without a mark', utf16.subarray(2), /zero byte/],
    ['a zip archive', Uint8Array.of(0x50, 0x4b, 3, 4, 20), /spreadsheet/],
    ['a gzip archive', Uint8Array.of(0x1f, 0x8b, 8), /gzip/],
  ])('%s is refused for what it is', async (_, content, found) => {
    for (const piece of [1000, 4]) {
      const [fault] = await faultsOf(textOf(memorySource('x', content, {}, piece)));
      expect(fault!.found).toMatch(found);
      expect(fault!.expected).toMatch(/UTF-8/);
    }
  });

  test('a byte that is no UTF-8 is found in its line', async () => {
    const content = Buffer.concat([Buffer.from('a\nb\nc\nd\n'.repeat(3)), Buffer.from('Ger\xe4t\n', 'latin1')]);
    for (const piece of [1000, 5]) {
      const [fault] = await faultsOf(textOf(memorySource('x', content, {}, piece)));
      expect(fault!.place).toEqual({ file: 'x', line: 13 });
    }
  });

  test('a file that changes its length while it is read is a fault', async () => {
    const [fault] = await faultsOf(textOf({ ...memorySource('x', 'a,b\n'), bytes: 9 }));
    expect(fault!.found).toMatch(/4 bytes where the file had 9/);
  });

  test('a file of unknown length is read as it comes', async () => {
    expect((await textOf({ ...memorySource('x', 'a\n'), bytes: Number.NaN })).digest.bytes).toBe(2);
  });

  test('a line without an end is not taken into memory for ever', async () => {
    const [fault] = await faultsOf(textOf(memorySource('x', new Uint8Array(2 ** 24 + 2).fill(97), {}, 2 ** 23)));
    expect(fault!.found).toMatch(/16 MiB/);
  });
});
