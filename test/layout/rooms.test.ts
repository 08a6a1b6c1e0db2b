import { posix } from 'node:path';
import { expect, test } from 'vitest';
import { entriesOf, filesBelow, textOf } from './project-files.ts';

/** Rooms, lowest first: a room imports from itself and from rooms before it. */
const ROOMS = [
  'quantity',
  'numeric',
  'readings',
  'takes',
  'model',
  'estimate',
  'findings',
  'whatif',
  'report',
  'cli',
] as const;

/** The only room that imports each of the packages. */
const DOORS: Readonly<Record<string, (typeof ROOMS)[number]>> = {
  commander: 'cli',
  'csv-parse': 'readings',
  'csv-stringify': 'report',
  'd3-scale': 'report',
  'd3-selection': 'report',
  'd3-shape': 'report',
  'd3-zoom': 'report',
  mathjs: 'readings',
  'ml-matrix': 'numeric',
  'pure-rand': 'numeric',
};

/** Loading mathjs costs about a second, ml-matrix 50 ms, the drawing packages 40 ms. */
const LATE_PACKAGES = ['mathjs', 'ml-matrix', 'd3-scale', 'd3-shape', 'd3-selection', 'd3-zoom'];

/** Rooms with chambers: pictures and the page are many small files of one subject. */
const CHAMBERS: Readonly<Record<string, readonly string[]>> = { report: ['figures', 'page'] };

/** What the top level holds; ignored output apart. */
const TOP_LEVEL = [
  '.biome.jsonc',
  '.ci/',
  '.gitignore',
  'DEVELOPERS.md',
  'LICENSE',
  'README.md',
  'bin/',
  'data-demo/',
  'package-lock.json',
  'package.json',
  'src/',
  'test/',
  'tsconfig.json',
];

/** No file needs more lines to say one thing. */
const MOST_LINES = 400;

interface Import {
  readonly file: string;
  readonly specifier: string;
  readonly isDynamic: boolean;
  readonly isType: boolean;
}

/** Comments may speak of imports; they are no imports. */
const withoutComments = (text: string) => text.replace(/\/\*[\s\S]*?\*\//g, '').replace(/^\s*\/\/.*$/gm, '');

const importsOf = (file: string): Import[] => {
  const text = withoutComments(textOf(file));
  const still = [...text.matchAll(/^(?:import|export)\b(\s+type\b)?[^;'"]*?from\s*['"]([^'"]+)['"]/gm)].map(
    (match) => ({
      file,
      specifier: match[2]!,
      isDynamic: false,
      isType: match[1] !== undefined,
    }),
  );
  const bare = [...text.matchAll(/^import\s*['"]([^'"]+)['"]/gm)].map((match) => ({
    file,
    specifier: match[1]!,
    isDynamic: false,
    isType: false,
  }));
  const dynamic = [...text.matchAll(/\bimport\(\s*['"]([^'"]+)['"]/g)].map((match) => ({
    file,
    specifier: match[1]!,
    isDynamic: true,
    isType: false,
  }));
  return [...still, ...bare, ...dynamic];
};

const SOURCES = filesBelow('src', ['.ts']);
const IMPORTS = SOURCES.flatMap(importsOf);
const roomOf = (file: string) => file.split('/')[1]!;
const isRelative = ({ specifier }: Import) => specifier.startsWith('.');
const packageOf = ({ specifier }: Import) =>
  specifier
    .split('/')
    .slice(0, specifier.startsWith('@') ? 2 : 1)
    .join('/');
const packageImports = IMPORTS.filter((one) => !isRelative(one) && !one.specifier.startsWith('node:'));

test('the imports that these tests look at are really found', () => {
  expect(importsOf('src/cli/main.ts')).toContainEqual({
    file: 'src/cli/main.ts',
    specifier: 'commander',
    isDynamic: false,
    isType: false,
  });
  expect(IMPORTS.some(({ isDynamic }) => isDynamic)).toBe(true);
  // Rough count by another way: every line that ends in a quoted name behind `from` or `import`.
  const rough = SOURCES.reduce(
    (sum, file) => sum + (textOf(file).match(/ from '[^']+';$|^import '[^']+';$/gm)?.length ?? 0),
    0,
  );
  expect(IMPORTS.filter(({ isDynamic }) => !isDynamic).length).toBe(rough);
});

test('beside the library door, the source holds rooms and nothing else', () => {
  const rooms = entriesOf('src').filter((entry) => entry !== 'index.ts');
  expect(rooms.filter((room) => !ROOMS.some((known) => `${known}/` === room))).toEqual([]);
  const chamberOf = (file: string) => file.split('/').slice(2, -1).join('/');
  const strange = SOURCES.filter((file) => file.split('/').length > 3).filter(
    (file) => !CHAMBERS[roomOf(file)]?.includes(chamberOf(file)),
  );
  expect(strange).toEqual([]);
});

test('a room imports only from itself and from rooms below it', () => {
  const order = (room: string) => (ROOMS as readonly string[]).indexOf(room);
  const wrong = IMPORTS.filter(isRelative).filter(({ file, specifier }) => {
    if (file === 'src/index.ts') return !/^\.\/[a-z]+\/[\w-]+\.ts$/.test(specifier);
    if (!/^(?:\.\.?\/)+(?:[a-z]+\/)*[\w-]+\.ts$/.test(specifier)) return true;
    const target = posix.join(posix.dirname(file), specifier);
    if (!SOURCES.includes(target)) return true;
    const isOwn = roomOf(target) === roomOf(file);
    return !(isOwn || (order(roomOf(target)) >= 0 && order(roomOf(target)) < order(roomOf(file))));
  });
  expect(wrong).toEqual([]);
});

test('each package is imported by one room only, and every package that runs with the program by one', () => {
  const found = new Map<string, Set<string>>();
  for (const one of packageImports) {
    const rooms = found.get(packageOf(one)) ?? new Set();
    found.set(packageOf(one), rooms.add(roomOf(one.file)));
  }
  expect(Object.fromEntries([...found].map(([name, rooms]) => [name, [...rooms].join()]))).toEqual(DOORS);
  const { dependencies } = JSON.parse(textOf('package.json')) as { dependencies: Record<string, string> };
  expect(Object.keys(dependencies).sort()).toEqual(Object.keys(DOORS).sort());
  for (const version of Object.values(dependencies)) expect(version).toMatch(/^\d+\.\d+\.\d+$/);
});

test('packages that take long to load are not loaded at the start of a command or of the library', () => {
  const reached = new Set(['src/index.ts', ...SOURCES.filter((file) => roomOf(file) === 'cli')]);
  // A set hands out what is added to it on the way; types cost nothing, and `await import` is what the test asks for.
  for (const file of reached) {
    for (const one of IMPORTS) {
      if (one.file !== file || one.isDynamic || one.isType || !isRelative(one)) continue;
      reached.add(posix.join(posix.dirname(file), one.specifier));
    }
  }
  expect(reached.size).toBeGreaterThan(SOURCES.length / 2);
  const early = packageImports.filter(
    (one) => reached.has(one.file) && !one.isDynamic && !one.isType && LATE_PACKAGES.includes(packageOf(one)),
  );
  expect(early).toEqual([]);
});

test('files, processes and terminals are the business of one room', () => {
  const outside = IMPORTS.filter(({ file }) => roomOf(file) !== 'cli').filter(({ specifier }) =>
    /^node:(?:fs|process|child_process|tty|os|worker_threads|net|http)/.test(specifier),
  );
  expect(outside).toEqual([]);
  const touching = SOURCES.filter((file) => roomOf(file) !== 'cli').filter((file) =>
    /\bprocess\.\w|\bconsole\.\w/.test(withoutComments(textOf(file))),
  );
  expect(touching).toEqual([]);
});

test('the top level holds what it is meant to hold and nothing else', () => {
  expect(entriesOf('.')).toEqual([...TOP_LEVEL].sort());
});

const TEXTS = [
  'package.json',
  'README.md',
  'DEVELOPERS.md',
  '.ci/run',
  ...['src', 'test', 'bin', 'data-demo'].flatMap((folder) => filesBelow(folder, ['.ts', '.js', '.md', '.json'])),
];

test('no file names a place on somebody’s machine', () => {
  const place = /(?<![\w.*/])\/(?:home|root|tmp|work|Users|mnt|opt)\/\w|\b[A-Z]:\\\w/;
  const named = TEXTS.flatMap((file) =>
    textOf(file)
      .split('\n')
      .flatMap((line, index) => (place.test(line) ? [`${file}:${index + 1}: ${line.trim()}`] : [])),
  );
  expect(named).toEqual([]);
});

test('nothing is left for later, switched off or hushed', () => {
  const mark = /\bTO(?:)DO\b|\bFIX(?:)ME\b|@ts-(?:ignore|expect-error|nocheck)|biome-(?:)ignore|\.(?:only|skip)\(/;
  const marked = TEXTS.filter((file) => file !== 'test/layout/rooms.test.ts').filter((file) => mark.test(textOf(file)));
  expect(marked).toEqual([]);
});

test('no source file is longer than a reader can hold', () => {
  const long = SOURCES.filter((file) => textOf(file).split('\n').length > MOST_LINES);
  expect(long).toEqual([]);
});
