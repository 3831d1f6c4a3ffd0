// The same visit gives the same report to the last bit: release binary, Chromium, Firefox. 500 generated visits.

import assert from 'node:assert/strict';
import { execFileSync } from 'node:child_process';
import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { before, describe, it } from 'node:test';
import { browserNames, command, launch, openFile, root, temporaryDirectory, waitForState } from './harness.mjs';

const VISITS = 500;

describe('same bits', () => {
  /** @type {string[]} */
  let visits = [];
  /** @type {string[]} */
  let fromBinary = [];

  before(() => {
    const directory = temporaryDirectory();
    const list = join(directory, 'visits.jsonl');
    execFileSync('cargo', ['run', '--quiet', '--locked', '--bin', 'generate_visits', '--', String(VISITS), list], {
      cwd: root,
      stdio: 'inherit',
    });
    visits = readFileSync(list, 'utf8').trimEnd().split('\n');
    fromBinary = visits.map((visit, i) => {
      const file = join(directory, `${i}.json`);
      writeFileSync(file, visit);
      return command(['appraise', file, '--json']).trimEnd();
    });
  });

  it('has reports worth comparing', () => {
    assert.equal(visits.length, VISITS);
    assert.equal(new Set(fromBinary).size, VISITS);
    const fitted = fromBinary.filter((report) => JSON.parse(report).fit !== null).length;
    assert.ok(fitted > VISITS / 2, `only ${fitted} of ${VISITS} visits have a fit`);
  });

  for (const name of browserNames) {
    it(`in ${name} as from the release binary`, async () => {
      const browser = await launch(name);
      try {
        const tab = await openFile(browser);
        await waitForState(tab, 'ready');
        /** @type {string[]} */
        const different = [];
        for (let first = 0; first < VISITS; first += 50) {
          const reports = await tab.evaluate(
            (some) => some.map((visit) => /** @type {any} */ (globalThis).bandleaf.report_json(JSON.parse(visit))),
            visits.slice(first, first + 50),
          );
          reports.forEach((report, i) => {
            if (report !== fromBinary[first + i])
              different.push(`visit ${first + i + 1}: ${firstDifference(fromBinary[first + i], report)}`);
          });
        }
        assert.deepEqual(different, []);
      } finally {
        await browser.close();
      }
    });
  }
});

/** @param {string} a @param {string} b */
function firstDifference(a, b) {
  let at = 0;
  while (at < a.length && a[at] === b[at]) at += 1;
  return `…${a.slice(Math.max(0, at - 60), at + 30)}… against …${b.slice(Math.max(0, at - 60), at + 30)}…`;
}
