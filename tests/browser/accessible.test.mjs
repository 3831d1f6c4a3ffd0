// axe-core, with the WCAG 2.2 A and AA rules named, on the page in its main states. What it cannot decide is explained.

import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { after, before, describe, it } from 'node:test';
import { browserNames, LAPTOP, launch, openFile, PHONE, TABLET_UPRIGHT, temporaryFile, waitForState } from './harness.mjs';
import { pressedDemo, withElement } from './leaves.mjs';

const axeSource = readFileSync(createRequire(new URL('../../web/package.json', import.meta.url)).resolve('axe-core/axe.min.js'), 'utf8');
const TAGS = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];

/** What axe-core leaves to a person: rule, where, and what a person found. @type {{ rule: string, target: RegExp, found: string }[]} */
const EXPLAINED = [];

/** @type {Record<string, (leaf: string) => string|null>} */
const FILES = {
  'blank page': () => null,
  leaf: (leaf) => leaf,
  'changed leaf': (leaf) => withElement(leaf, 'visit', (text) => text.replace(/invented/i, 'measured')),
};

for (const name of browserNames) {
  for (const mode of ['light', 'dark']) {
    describe(`${name}, ${mode}: accessibility`, () => {
      /** @type {import('puppeteer-core').Browser} */
      let browser;
      before(async () => {
        // Chromium emulates the colour scheme per tab; Firefox takes it from a preference (0 is dark, 1 is light).
        browser = await launch(name, { preferences: { 'layout.css.prefers-color-scheme.content-override': mode === 'dark' ? 0 : 1 } });
      });
      after(() => browser.close());

      for (const [state, make] of Object.entries(FILES)) {
        for (const [size, viewport] of Object.entries({ laptop: LAPTOP, tablet: TABLET_UPRIGHT, phone: PHONE })) {
          it(`${state}, ${size}`, async (context) => {
            const content = make(pressedDemo(context));
            const tab = await openFile(browser, content === null ? undefined : temporaryFile(context, 'leaf.html', content));
            await tab.setViewport({ ...viewport, ...(name === 'firefox' ? { hasTouch: undefined } : {}) });
            if (name === 'chromium') await tab.emulateMediaFeatures([{ name: 'prefers-color-scheme', value: mode }]);
            await waitForState(tab, 'ready', 'altered');
            const { violations, incomplete } = await audit(tab);
            assert.deepEqual(violations, []);
            assert.deepEqual(
              incomplete.filter((one) => !EXPLAINED.some((known) => known.rule === one.rule && known.target.test(one.target))),
              [],
            );
          });
        }
      }
    });
  }
}

/** @param {import('./harness.mjs').Tab} tab */
async function audit(tab) {
  // The driver puts the text in as its own, which the page's policy does not reach.
  await tab.evaluate(`${axeSource}; void 0`);
  return tab.evaluate(async (tags) => {
    const result = await /** @type {any} */ (globalThis).axe.run(document, {
      runOnly: { type: 'tag', values: tags },
      resultTypes: ['violations', 'incomplete'],
    });
    const short = (/** @type {any[]} */ rules) =>
      rules.flatMap((rule) =>
        rule.nodes.map((/** @type {any} */ node) => ({
          rule: rule.id,
          target: node.target.join(' '),
          why: node.any
            .concat(node.all, node.none)
            .map((/** @type {any} */ check) => check.message)
            .join('; '),
        })),
      );
    return { violations: short(result.violations), incomplete: short(result.incomplete) };
  }, TAGS);
}
