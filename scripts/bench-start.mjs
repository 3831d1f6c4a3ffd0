// See scripts/bench-start. The page marks the moment at which a value can first be shown (`bandleaf-value`); the clock is
// the page's own, from the start of the navigation.

import { pathToFileURL } from 'node:url';
import { browserNames, launch, newTab } from '../tests/browser/harness.mjs';

const LOADS = 20;
const url = pathToFileURL(process.argv[2]).href;

for (const name of browserNames) {
  const browser = await launch(name);
  /** @type {number[]} */
  const times = [];
  // The first load warms the browser up and is not counted.
  const tab = await newTab(browser);
  for (let load = 0; load <= LOADS; load += 1) {
    await tab.goto('about:blank');
    await tab.goto(url, { waitUntil: 'load' });
    await tab.waitForFunction(() => performance.getEntriesByName('bandleaf-value').length > 0, { timeout: 30_000 });
    const time = await tab.evaluate(() => performance.getEntriesByName('bandleaf-value')[0].startTime);
    if (load > 0) times.push(time);
  }
  await browser.close();
  times.sort((a, b) => a - b);
  const at = (/** @type {number} */ share) => times[Math.min(LOADS - 1, Math.ceil(share * LOADS) - 1)].toFixed(0);
  console.log(`${name.padEnd(9)} median ${at(0.5)} ms, 95th percentile ${at(0.95)} ms, ${LOADS} loads`);
}
