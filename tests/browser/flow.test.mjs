// The main job by hand: paste certified data as they stand, see the certified coefficients, type a reading, save the leaf,
// open it again and get the same numbers. Data and certified values: NIST Statistical Reference Datasets, linear
// regression (public domain).
//
// Chromium takes a paste event that carries data; Firefox does not, so there the same text comes as a dropped file.

import assert from 'node:assert/strict';
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { after, before, describe, it } from 'node:test';
import {
  browserNames,
  command,
  launch,
  openFile,
  picture,
  pressButton,
  root,
  shownText,
  temporaryDirectory,
  temporaryFile,
  typeInto,
  waitForState,
} from './harness.mjs';

const fixtures = join(root, 'crates', 'intake', 'tests', 'fixtures');

const CERTIFIED = [
  { name: 'norris', shape: null, terms: '1, x', coefficients: ['-0.262323073774029', '1.00211681802045'], reading: '338,1' },
  {
    name: 'pontius',
    shape: 'quadratic',
    terms: '1, x, x^2',
    coefficients: ['0.673565789473684E-03', '0.732059160401003E-06', '-0.316081871345029E-14'],
    reading: '1.239722',
  },
];

for (const name of browserNames) {
  describe(`${name}: from pasted points to a leaf`, () => {
    /** @type {import('puppeteer-core').Browser} */
    let browser;
    before(async () => {
      browser = await launch(name);
    });
    after(() => browser.close());

    for (const set of CERTIFIED) {
      it(`${set.name}: certified coefficients, a value, a leaf that opens as identical`, async () => {
        const tab = await openFile(browser);
        await waitForState(tab, 'ready');
        await catchDownloads(tab);
        const text = readFileSync(join(fixtures, `${set.name}.csv`), 'utf8');
        await (name === 'chromium' ? paste(tab, text) : drop(tab, text));
        await tab.waitForFunction((rows) => document.querySelectorAll('input[data-column="indication"]').length >= rows, {}, 10);
        if (set.shape) await chooseShape(tab, set.shape);
        await picture(tab, `${set.name}-${name}`);

        const first = await savedLeaf(tab);
        await typeInto(tab, '#reading', set.reading);
        const shown = await valueShown(tab);
        assert.match(shown, /±/);
        const leaf = await savedLeaf(tab);
        assert.equal(leaf, first, 'a typed reading changes nothing of what is saved');
        await pressButton(tab, 'Undo');
        assert.equal(await tab.$eval('#reading', (field) => /** @type {HTMLInputElement} */ (field).value), set.reading);

        const report = reportIn(leaf);
        assert.equal(report.fit.terms.map((/** @type {any} */ t) => t.term).join(', '), set.terms);
        for (const [at, term] of report.fit.terms.entries()) agrees(term.estimate, set.coefficients[at]);

        const file = temporaryFile('leaf.html', leaf);
        assert.match(command(['verify', file]), /Identical/);
        const again = await openFile(browser, file);
        assert.equal(await waitForState(again, 'ready', 'altered', 'failed'), 'ready', await shownText(again));
        assert.match(await shownText(again), /identical: recomputed/);
        await typeInto(again, '#reading', set.reading);
        assert.equal(await valueShown(again), shown);
        assert.equal(command(['read', file, set.reading]).includes(shown), true, command(['read', file, set.reading]));
        assert.deepEqual([...tab.complaints, ...again.complaints], []);
      });
    }

    it('a leaf saved by the page is the one that the command presses', async () => {
      const tab = await openFile(browser);
      await waitForState(tab, 'ready');
      await catchDownloads(tab);
      await drop(tab, readFileSync(join(root, 'web', 'demo', 'transmitter.json'), 'utf8'), 'visit.json');
      await tab.waitForFunction(() => document.querySelectorAll('input[data-column="indication"]').length > 5);
      const leaf = await savedLeaf(tab);
      const visit = join(temporaryDirectory(), 'visit.json');
      writeFileSync(visit, elementVisit(leaf));
      const pressed = join(temporaryDirectory(), 'pressed.html');
      command(['press', visit, '--out', pressed]);
      assert.equal(readFileSync(pressed, 'utf8') === leaf, true, 'the two leaves differ');
    });
  });
}

/** @typedef {import('./harness.mjs').Tab} Tab */

/** The digits of `found` that agree with a certified value: at least 13. @param {number} found @param {string} certified */
function agrees(found, certified) {
  const wanted = Number(certified);
  const digits = found === wanted ? 15 : -Math.log10(Math.abs((found - wanted) / wanted));
  assert.ok(digits >= 13, `${found} against ${certified}: ${digits.toFixed(1)} digits`);
}

/** Keeps what would be downloaded, in place of the browser's own dialogue. @param {Tab} tab */
async function catchDownloads(tab) {
  await tab.evaluate(() => {
    const page = /** @type {any} */ (globalThis);
    page.showSaveFilePicker = undefined;
    page.kept = [];
    URL.createObjectURL = (blob) => {
      page.kept.push(blob);
      return '#kept';
    };
  });
}

/** @param {Tab} tab @returns {Promise<string>} */
async function savedLeaf(tab) {
  const before = await tab.evaluate(() => /** @type {any} */ (globalThis).kept.length);
  await pressButton(tab, 'Save leaf');
  await tab.waitForFunction((count) => /** @type {any} */ (globalThis).kept.length > count, {}, before);
  return tab.evaluate(() => /** @type {any} */ (globalThis).kept.at(-1).text());
}

/** @param {string} leaf */
function elementVisit(leaf) {
  return /id="visit">([\s\S]*?)<\/script>/.exec(leaf)?.[1] ?? '';
}

/** The report of the visit in a leaf, by the command line. @param {string} leaf */
function reportIn(leaf) {
  return JSON.parse(command(['appraise', temporaryFile('visit.json', elementVisit(leaf)), '--json']));
}

/** @param {Tab} tab */
async function valueShown(tab) {
  const handle = await tab.waitForFunction(
    () => document.querySelector('output.value')?.textContent?.includes('±') && document.querySelector('output.value')?.textContent,
  );
  return String(await handle.jsonValue()).trim();
}

/** @param {Tab} tab @param {string} shape */
async function chooseShape(tab, shape) {
  await tab.evaluate(() => {
    const choice = [...document.querySelectorAll('.choice-line')].find((each) => each.textContent?.includes('Shape'));
    choice?.querySelector('button')?.click();
  });
  await pressButton(tab, shape);
  await pressButton(tab, 'Close');
}

/** @param {Tab} tab @param {string} text */
async function paste(tab, text) {
  await tab.evaluate((cells) => {
    const data = new DataTransfer();
    data.setData('text/plain', cells);
    const target = document.querySelector('input[data-column="reference"]') ?? document.body;
    target.dispatchEvent(new ClipboardEvent('paste', { clipboardData: data, bubbles: true, cancelable: true }));
  }, text);
}

/** @param {Tab} tab @param {string} text @param {string} [fileName] */
async function drop(tab, text, fileName = 'points.csv') {
  await tab.evaluate(
    (content, called) => {
      const data = new DataTransfer();
      data.items.add(new File([content], called, { type: 'text/plain' }));
      document.body.dispatchEvent(new DragEvent('drop', { dataTransfer: data, bubbles: true, cancelable: true }));
    },
    text,
    fileName,
  );
}
