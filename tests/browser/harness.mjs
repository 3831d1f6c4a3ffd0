// Opens the built page from file:// in Chromium and Firefox, each time in a new profile, and records what the console says.
//
// puppeteer-core, because one driver serves both: Chromium over its own protocol, Firefox over WebDriver BiDi.

import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';

// The npm packages live in web/, so that there is one lock file.
const fromWeb = createRequire(new URL('../../web/package.json', import.meta.url));
const { default: puppeteer } = await import(pathToFileURL(fromWeb.resolve('puppeteer-core')).href);

/** @typedef {'chromium'|'firefox'} BrowserName */
/** @typedef {import('puppeteer-core').Page & { complaints: string[] }} Tab */

export const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));
export const pageFile = join(root, 'dist', 'bandleaf.html');
export const binary = join(process.env.CARGO_TARGET_DIR ?? join(root, 'target'), 'release', 'bandleaf');

/** What is left of a 1366×768 laptop's screen inside a browser window. */
export const LAPTOP = { width: 1366, height: 625 };
export const TABLET_UPRIGHT = { width: 768, height: 1024, hasTouch: true };
export const PHONE = { width: 390, height: 844, hasTouch: true };

/** Both browsers; BROWSERS=chromium limits a run. @type {BrowserName[]} */
export const browserNames = /** @type {BrowserName[]} */ ((process.env.BROWSERS ?? 'chromium firefox').split(/[ ,]+/));

const CANDIDATES = {
  chromium: [process.env.CHROMIUM, 'chromium', 'chromium-browser', 'google-chrome'],
  firefox: [process.env.FIREFOX, 'firefox-esr', 'firefox'],
};

/** As root Chromium has no sandbox; the rest keeps it from looking for servers of its own. */
const CHROMIUM_FLAGS = [
  '--no-sandbox',
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
];

/** The driver switches the strict policy for local files off, which no user's Firefox has. */
const FIREFOX_PREFERENCES = { 'security.fileuri.strict_origin_policy': true };

/**
 * @param {BrowserName} name
 * @param {{ flags?: string[], preferences?: Record<string, unknown>, viewport?: import('puppeteer-core').Viewport|null }} [options]
 */
export async function launch(name, { flags = [], preferences = {}, viewport = LAPTOP } = {}) {
  return puppeteer.launch({
    browser: name === 'chromium' ? 'chrome' : 'firefox',
    executablePath: executable(name),
    headless: true,
    defaultViewport: viewport,
    args: name === 'chromium' ? [...CHROMIUM_FLAGS, ...flags] : flags,
    extraPrefsFirefox: name === 'firefox' ? { ...FIREFOX_PREFERENCES, ...preferences } : undefined,
    timeout: 60_000,
    protocolTimeout: 300_000,
  });
}

/** @param {BrowserName} name */
function executable(name) {
  for (const candidate of CANDIDATES[name].filter((one) => one !== undefined)) {
    try {
      return execFileSync('/bin/sh', ['-c', 'command -v "$0"', candidate], { encoding: 'utf8' }).trim();
    } catch {
      // The next name may be there.
    }
  }
  throw new Error(`There is no ${name}: run scripts/setup, or name one with ${name.toUpperCase()}=PATH.`);
}

/**
 * Opens a file in a new tab; `complaints` collects errors and warnings of the console, and uncaught errors.
 * @param {import('puppeteer-core').Browser} browser
 * @param {string} [file]
 * @returns {Promise<Tab>}
 */
export async function openFile(browser, file = pageFile) {
  const tab = await newTab(browser);
  await tab.goto(pathToFileURL(file).href, { waitUntil: 'load' });
  return tab;
}

/** @param {import('puppeteer-core').Browser} browser @returns {Promise<Tab>} */
export async function newTab(browser) {
  const tab = /** @type {Tab} */ (await browser.newPage());
  tab.complaints = [];
  tab.on('console', (message) => {
    if (['error', 'warn', 'assert'].includes(message.type())) tab.complaints.push(`${message.type()}: ${message.text()}`);
  });
  tab.on('pageerror', (error) => tab.complaints.push(`uncaught: ${error instanceof Error ? error.message : error}`));
  return tab;
}

/**
 * Waits until the root element says one of these states, and tells which.
 * @param {Tab} tab
 * @param {...string} states
 */
export async function waitForState(tab, ...states) {
  try {
    await tab.waitForFunction((wanted) => wanted.includes(document.documentElement.dataset.state ?? ''), { timeout: 30_000 }, states);
  } catch (cause) {
    const found = await tab.evaluate(() => `${document.documentElement.dataset.state}: ${document.body.innerText.slice(0, 400)}`);
    throw new Error(`Waited for ${states.join(' or ')}, found ${found}\n${tab.complaints.join('\n')}`, { cause });
  }
  return tab.evaluate(() => document.documentElement.dataset.state ?? '');
}

/**
 * Types into a field in place of what stands there.
 * @param {Tab} tab
 * @param {string} selector
 * @param {string} text
 */
export async function typeInto(tab, selector, text) {
  await tab.waitForSelector(selector, { visible: true });
  await tab.focus(selector);
  await tab.$eval(selector, (field) => /** @type {HTMLInputElement} */ (field).select());
  await tab.keyboard.type(text);
}

/**
 * Presses the button whose name begins with this text.
 * @param {Tab} tab
 * @param {string} name
 */
export async function pressButton(tab, name) {
  const handle = await tab.waitForFunction(
    (wanted) =>
      [...document.querySelectorAll('button')].find((button) =>
        (button.getAttribute('aria-label') ?? button.innerText).trim().startsWith(wanted),
      ),
    { timeout: 10_000 },
    name,
  );
  await /** @type {import('puppeteer-core').ElementHandle<Element>} */ (handle.asElement()).click();
}

/**
 * Loads the demo of this name into the sheet.
 * @param {Tab} tab
 * @param {string} name
 */
export async function loadDemo(tab, name) {
  await pressButton(tab, 'Sheet');
  await pressButton(tab, `Demo: ${name}`);
  await tab.waitForFunction(() => document.querySelectorAll('input[data-column="indication"]').length > 3, { timeout: 10_000 });
}

/** The text that a person sees. @param {Tab} tab */
export function shownText(tab) {
  return tab.evaluate(() => document.body.innerText);
}

/**
 * A picture of the window, kept where SCREENSHOTS names a directory.
 * @param {Tab} tab
 * @param {string} name
 */
export async function picture(tab, name) {
  const directory = process.env.SCREENSHOTS;
  if (directory) await tab.screenshot({ path: /** @type {`${string}.png`} */ (join(directory, `${name}.png`)) });
}

/** Everything temporary lies in one directory, which goes when the process ends. */
const temporary = mkdtempSync(join(tmpdir(), 'bandleaf-'));
process.on('exit', () => rmSync(temporary, { recursive: true, force: true }));

/** A new directory, removed in the end. */
export function temporaryDirectory() {
  return mkdtempSync(join(temporary, 'test-'));
}

/**
 * Writes a file into a new directory and tells its path.
 * @param {string} name
 * @param {string|Uint8Array} content
 */
export function temporaryFile(name, content) {
  const path = join(temporaryDirectory(), name);
  writeFileSync(path, content);
  return path;
}

/**
 * Runs the release binary; what it prints. Status 2 with output is a report of what cannot be computed.
 * @param {string[]} args
 */
export function command(args) {
  const { status, stdout, stderr, error } = spawnSync(binary, args, { encoding: 'utf8', maxBuffer: 1 << 28 });
  if (error ?? (status !== 0 && !(status === 2 && stdout !== ''))) throw new Error(`bandleaf ${args.join(' ')}: ${error ?? stderr}`);
  return stdout;
}
