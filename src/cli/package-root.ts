import { readFileSync } from 'node:fs';
import { readFile } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

interface Package {
  /** Folder of the package. */
  readonly root: string;
  readonly version: string;
}

let found: Package | undefined;

/**
 * The installed package: its folder and its version.
 * It is looked for upwards from this code, since the bundler may put this file at any depth.
 */
export function installedPackage(): Package {
  if (found !== undefined) return found;
  let folder = dirname(fileURLToPath(import.meta.url));
  for (;;) {
    const manifest = manifestIn(folder);
    if (manifest?.name === 'oddloop') {
      found = { root: folder, version: manifest.version };
      return found;
    }
    const above = dirname(folder);
    if (above === folder) throw new Error('the package.json of oddloop is not above its code');
    folder = above;
  }
}

/** Text of the report page's program, as the build has bundled it. */
export function pageScript(): Promise<string> {
  return readFile(join(installedPackage().root, 'dist', 'report-page.js'), 'utf8');
}

function manifestIn(folder: string): { readonly name: string; readonly version: string } | undefined {
  let text: string;
  try {
    text = readFileSync(join(folder, 'package.json'), 'utf8');
  } catch {
    return undefined;
  }
  return JSON.parse(text) as { name: string; version: string };
}
