/** Debian's Chromium, driven without a screen. */
import { existsSync } from 'node:fs';
import { pathToFileURL } from 'node:url';
import { type Browser, chromium, type Page } from 'playwright-core';

const PLACES = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'];

/** Where the browser is; absent where there is none. */
const BROWSER = PLACES.find((place) => existsSync(place));

/** Without a browser these tests are left out, with one line that says so; where all has to be tested (`CI=true`) they fail. */
export const mayRun = (): boolean => {
  if (BROWSER !== undefined || process.env.CI === 'true') return true;
  console.warn('The report’s page is not tested: no Chromium here (apt-get install chromium).');
  return false;
};

export const startBrowser = (): Promise<Browser> => {
  if (BROWSER === undefined) throw new Error('CI=true, and no Chromium to test the report’s page with');
  return chromium.launch({ executablePath: BROWSER, args: ['--no-sandbox'] });
};

export interface OpenPage {
  readonly page: Page;
  /** Whatever went wrong in the page, and every request beside the page itself. */
  readonly troubles: string[];
}

export const openPage = async (
  browser: Browser,
  file: string,
  { width = 1000, colorScheme = 'light' as 'light' | 'dark', javaScriptEnabled = true } = {},
): Promise<OpenPage> => {
  const context = await browser.newContext({ viewport: { width, height: 900 }, colorScheme, javaScriptEnabled });
  const page = await context.newPage();
  const troubles: string[] = [];
  const url = pathToFileURL(file).href;
  page.on('console', (message) => troubles.push(`${message.type()}: ${message.text()}`));
  page.on('pageerror', (error) => troubles.push(`error: ${error.message}`));
  page.on('request', (request) => {
    if (request.url() !== url) troubles.push(`request: ${request.url()}`);
  });
  page.on('dialog', (dialog) => {
    troubles.push(`dialog: ${dialog.message()}`);
    void dialog.dismiss();
  });
  await page.goto(url);
  return { page, troubles };
};
