// Opening from file://: the page starts without complaint, says in words where it cannot, and a leaf opens as identical.

import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { after, before, describe, it } from 'node:test';
import { browserNames, launch, openFile, pageFile, picture, shownText, temporaryFile, waitForState } from './harness.mjs';
import { pressedDemo } from './leaves.mjs';

for (const name of browserNames) {
  describe(`${name}: opening`, () => {
    /** @type {import('puppeteer-core').Browser} */
    let browser;
    before(async () => {
      browser = await launch(name);
    });
    after(() => browser.close());

    it('starts from file:// without a complaint of the console', async () => {
      const tab = await openFile(browser);
      assert.equal(await waitForState(tab, 'ready', 'failed', 'altered'), 'ready', await shownText(tab));
      assert.equal(await tab.evaluate(() => document.getElementById('damaged')), null);
      assert.equal(await tab.evaluate(() => location.protocol), 'file:');
      assert.deepEqual(tab.complaints, []);
      await picture(tab, `blank-${name}`);
    });

    it('opens a pressed leaf as identical, with its value', async () => {
      const file = temporaryFile('leaf.html', pressedDemo());
      const tab = await openFile(browser, file);
      assert.equal(await waitForState(tab, 'ready', 'failed', 'altered'), 'ready', await shownText(tab));
      const outcome = await tab.evaluate(() => {
        const ids = ['style', 'shell', 'seal', 'visit', 'wasm', 'program'];
        const texts = Object.fromEntries(ids.map((id) => [id, document.getElementById(id)?.textContent]));
        return /** @type {any} */ (globalThis).bandleaf.open_texts(texts).outcome;
      });
      assert.equal(outcome, 'identical');
      assert.deepEqual(tab.complaints, []);
      await picture(tab, `leaf-${name}`);
    });

    it('says so where the core cannot be unpacked', async () => {
      const page = readFileSync(pageFile, 'utf8');
      const tab = await openFile(browser, temporaryFile('cut.html', page.slice(0, page.length / 2)));
      const text = await shownText(tab);
      assert.match(text, /damaged/);
      assert.match(text, /original file/);
    });
  });

  describe(`${name}: without WebAssembly`, () => {
    it('fails with a sentence that says what to do', async () => {
      const without = name === 'chromium' ? { flags: ['--js-flags=--jitless'] } : { preferences: { 'javascript.options.wasm': false } };
      const browser = await launch(name, without);
      try {
        const tab = await openFile(browser);
        assert.equal(await waitForState(tab, 'ready', 'failed', 'altered'), 'failed');
        assert.match(await shownText(tab), /WebAssembly[\s\S]*(Chromium|Firefox)/);
        await picture(tab, `failed-${name}`);
      } finally {
        await browser.close();
      }
    });
  });
}
