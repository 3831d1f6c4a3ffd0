// axe-core, with the WCAG 2.2 A and AA rules named, on the page in its main states, light and dark, in three sizes.
// What axe-core leaves to a person is listed with what a person found.

import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { after, before, describe, it } from 'node:test';
import {
  browserNames,
  LAPTOP,
  launch,
  loadDemo,
  openFile,
  PHONE,
  picture,
  pressButton,
  TABLET_UPRIGHT,
  temporaryFile,
  typeInto,
  waitForState,
} from './harness.mjs';
import { pressedDemo, withElement } from './leaves.mjs';

/** @typedef {import('./harness.mjs').Tab} Tab */
/** @typedef {{ rule: string, target: string, why: string }} Finding */

const axeSource = readFileSync(createRequire(new URL('../../web/package.json', import.meta.url)).resolve('axe-core/axe.min.js'), 'utf8');
const TAGS = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];

/** High enough that nothing of the page lies under the row of answers, which stays in view. */
const TALL = 4000;

/** What axe-core leaves to a person: the rule, why it does, and what a person found. */
const EXPLAINED = [
  {
    rule: 'color-contrast',
    why: /Element has no value/,
    found: 'Empty cells take the ink of filled ones, which are measured in the state "sheet with points".',
  },
  {
    rule: 'color-contrast',
    why: /only non-text characters/,
    found: 'Arrows and marks in the ink of the text beside them; each has its meaning in words there too.',
  },
  {
    rule: 'label-content-name-mismatch',
    why: /Unable to determine/,
    found: 'The visible text of Undo and Redo is an arrow, no words that a name could hold.',
  },
];

/**
 * The states: what file is opened, and what is done then.
 * @type {Record<string, { file?: (leaf: string) => string, act?: (tab: Tab) => Promise<void> }>}
 */
const STATES = {
  'blank sheet': {},
  'sheet with points': {
    act: async (tab) => {
      await loadDemo(tab, 'Header tank');
      await typeInto(tab, '#reading', '812');
    },
  },
  'choice of shape': {
    act: async (tab) => {
      await loadDemo(tab, 'Header tank');
      await pressButton(tab, 'Change: Shape');
    },
  },
  'what was known before': {
    act: async (tab) => {
      await loadDemo(tab, 'Pressure transmitter');
      await pressButton(tab, 'Change: Known before');
    },
  },
  'about and licences': {
    act: async (tab) => {
      await pressButton(tab, 'Sheet');
      await pressButton(tab, 'About');
    },
  },
  'row in error': {
    act: async (tab) => {
      await loadDemo(tab, 'Header tank');
      await typeInto(tab, 'input[data-column="indication"][data-row="2"]', 'abc');
      await tab.keyboard.press('Tab');
    },
  },
  leaf: { file: (leaf) => leaf },
  'changed leaf': { file: (leaf) => withElement(leaf, 'visit', (text) => text.replace(/invented/i, 'measured')) },
};

for (const name of browserNames) {
  for (const mode of ['light', 'dark']) {
    describe(`${name}, ${mode}: accessibility`, () => {
      /** @type {import('puppeteer-core').Browser} */
      let browser;
      before(async () => {
        // Chromium emulates the colour scheme by tab; Firefox takes it from a preference (0 is dark, 1 is light).
        browser = await launch(name, { preferences: { 'layout.css.prefers-color-scheme.content-override': mode === 'dark' ? 0 : 1 } });
      });
      after(() => browser.close());

      // Other sizes change the arrangement, neither colours nor what a browser makes of the same elements: once is enough.
      const sizes = name === 'chromium' && mode === 'light' ? { laptop: LAPTOP, tablet: TABLET_UPRIGHT, phone: PHONE } : { laptop: LAPTOP };
      for (const [state, { file, act }] of Object.entries(STATES)) {
        for (const [size, { width, height }] of Object.entries(sizes)) {
          it(`${state}, ${size}`, async () => {
            const tab = await openFile(browser, file && temporaryFile('leaf.html', file(pressedDemo())));
            await tab.setViewport({ width, height });
            if (name === 'chromium') await tab.emulateMediaFeatures([{ name: 'prefers-color-scheme', value: mode }]);
            await waitForState(tab, 'ready', 'altered');
            await act?.(tab);
            await picture(tab, `${state}-${size}-${mode}-${name}`);
            const asSeen = await audit(tab);
            await tab.setViewport({ width, height: TALL });
            const tall = await audit(tab);
            assert.deepEqual([...asSeen.violations, ...tall.violations], []);
            assert.deepEqual(unexplained(asSeen.incomplete, tall.incomplete), []);
            assert.deepEqual(tab.complaints, []);
            await tab.close();
          });
        }
      }
    });
  }
}

/**
 * What neither the list explains nor the tall window decides: there nothing lies over anything.
 * @param {Finding[]} asSeen
 * @param {Finding[]} tall
 */
function unexplained(asSeen, tall) {
  const unknown = (/** @type {Finding} */ one) => !EXPLAINED.some((known) => known.rule === one.rule && known.why.test(one.why));
  const undecided = tall.filter(unknown);
  const hidden = asSeen.filter(unknown).filter((one) => !/overlapped|obscured|outside/.test(one.why));
  return [...hidden, ...undecided];
}

/**
 * @param {Tab} tab
 * @returns {Promise<{ violations: Finding[], incomplete: Finding[] }>}
 */
async function audit(tab) {
  // The driver puts the text in as its own, which the page's policy does not reach.
  await tab.evaluate(`globalThis.axe ?? (() => { ${axeSource} })(); void 0`);
  return tab.evaluate(async (tags) => {
    const options = { runOnly: { type: 'tag', values: tags }, resultTypes: ['violations', 'incomplete'] };
    const result = await /** @type {any} */ (globalThis).axe.run(document, options);
    const why = (/** @type {any} */ node) =>
      [...node.any, ...node.all, ...node.none].map((/** @type {any} */ check) => check.message).join('; ');
    const found = (/** @type {any[]} */ rules) =>
      rules.flatMap((rule) =>
        rule.nodes.map((/** @type {any} */ node) => ({ rule: rule.id, target: node.target.join(' '), why: why(node) })),
      );
    return { violations: found(result.violations), incomplete: found(result.incomplete) };
  }, TAGS);
}
