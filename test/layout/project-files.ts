import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

/** Folder of the project. */
const PROJECT = fileURLToPath(new URL('../..', import.meta.url));

/** Text of a file, by its name relative to the project. */
export const textOf = (name: string): string => readFileSync(join(PROJECT, name), 'utf8');

/** Names that `.gitignore` keeps out: plain names, and `*.ending`. */
const ignored = textOf('.gitignore')
  .split('\n')
  .map((line) => line.trim().replace(/\/$/, ''))
  .filter((line) => line !== '');

const isIgnored = (name: string) =>
  name === '.git' || ignored.some((rule) => (rule.startsWith('*') ? name.endsWith(rule.slice(1)) : name === rule));

/** What lies in a folder of the project, ignored output apart; folders end with a stroke. */
export function entriesOf(folder: string): string[] {
  return readdirSync(join(PROJECT, folder), { withFileTypes: true })
    .filter((entry) => !isIgnored(entry.name))
    .map((entry) => (entry.isDirectory() ? `${entry.name}/` : entry.name))
    .sort();
}

/** Files in a folder and all folders below, relative to the project, that have one of the endings. */
export function filesBelow(folder: string, endings: readonly string[]): string[] {
  return entriesOf(folder).flatMap((entry) => {
    const name = `${folder}/${entry}`;
    if (entry.endsWith('/')) return filesBelow(name.slice(0, -1), endings);
    return endings.some((ending) => name.endsWith(ending)) ? [name] : [];
  });
}
