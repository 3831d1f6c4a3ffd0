// A leaf in which something was changed never shows a value as if nothing had happened.

import assert from 'node:assert/strict';
import { after, before, describe, it } from 'node:test';
import { browserNames, launch, openFile, picture, shownText, temporaryFile, typeInto, waitForState } from './harness.mjs';
import { pressedDemo, withElement, withReport } from './leaves.mjs';

/** A value with its uncertainty, however it is written. */
const VALUE = /\d\s*±|±\s*\d/;

/** @type {Record<string, (leaf: string) => string>} */
const CHANGES = {
  'visit: one indication': (leaf) =>
    withElement(leaf, 'visit', (text) =>
      text.replace(/"indication":(\[?)(\d)/, (_, open, digit) => `"indication":${open}${(Number(digit) + 1) % 10 || 1}`),
    ),
  'visit: a note': (leaf) => withElement(leaf, 'visit', (text) => text.replace(/invented/i, 'measured')),
  'wasm: one character': (leaf) => withElement(leaf, 'wasm', (text) => flipped(text, Math.floor(text.length / 2))),
  'wasm: left out': (leaf) => withElement(leaf, 'wasm', () => ''),
  'style: a colour': (leaf) => withElement(leaf, 'style', (text) => `${text}body{color:#123456}`),
  'seal: a digest': (leaf) =>
    withElement(leaf, 'seal', (text) => text.replace(/"visit":"sha256:(.)/, (_, digit) => `"visit":"sha256:${digit === '0' ? '1' : '0'}`)),
  'seal: a number of the report, digests made right again': (leaf) => withReport(leaf, (report) => (report.fit.terms[0].estimate += 1)),
};

/** @param {string} text @param {number} at */
function flipped(text, at) {
  return text.slice(0, at) + (text[at] === 'A' ? 'B' : 'A') + text.slice(at + 1);
}

for (const name of browserNames) {
  describe(`${name}: changed leaves`, () => {
    /** @type {import('puppeteer-core').Browser} */
    let browser;
    before(async () => {
      browser = await launch(name);
    });
    after(() => browser.close());

    it('shows a value in the unchanged leaf, so that the tests below can fail', async () => {
      const tab = await openFile(browser, temporaryFile('leaf.html', pressedDemo()));
      await waitForState(tab, 'ready');
      await typeInto(tab, '#reading', '812');
      await tab.waitForFunction(() => /±\s*\d/.test(document.body.innerText), { timeout: 10_000 });
      assert.match(await shownText(tab), VALUE);
    });

    for (const [what, change] of Object.entries(CHANGES)) {
      it(`refuses: ${what}`, async () => {
        const tab = await openFile(browser, temporaryFile('leaf.html', change(pressedDemo())));
        assert.equal(await waitForState(tab, 'ready', 'failed', 'altered'), 'altered');
        const text = await shownText(tab);
        assert.doesNotMatch(text, VALUE);
        assert.match(text, /(changed|not as|not those|differ)/i);
        await picture(tab, `altered-${what.replace(/\W+/g, '-')}-${name}`);
      });
    }

    it('runs no changed program: the text that stands in the file stays', async () => {
      const leaf = withElement(pressedDemo(), 'program', (text) => `${text}\nvoid 0`);
      const tab = await openFile(browser, temporaryFile('leaf.html', leaf));
      await new Promise((resolve) => setTimeout(resolve, 500));
      assert.equal(await tab.evaluate(() => document.documentElement.dataset.state), undefined);
      const text = await shownText(tab);
      assert.match(text, /damaged, or scripts are blocked/);
      assert.doesNotMatch(text, VALUE);
    });
  });
}
