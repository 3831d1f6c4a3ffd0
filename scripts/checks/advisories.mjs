// Refuses package versions that scripts/advisories.json names as bad. Works offline, and knows only what stands there.

import assert from 'node:assert';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { packages, root } from './packages.mjs';

/** @typedef {{ kind: string, package: string, bad: string, id: string, what: string }} Advisory */
/** @type {{ reviewed: string, advisories: Advisory[] }} */
const { reviewed, advisories } = JSON.parse(readFileSync(join(root, 'scripts', 'advisories.json'), 'utf8'));

/** Negative, zero or positive as a version is before, at or after another; a pre-release is before its release. @param {string} a @param {string} b */
function order(a, b) {
  const parts = (/** @type {string} */ version) => version.split('+')[0].split('-');
  const [coreA, preA] = parts(a);
  const [coreB, preB] = parts(b);
  const difference = [0, 1, 2].map((i) => Number(coreA.split('.')[i] ?? 0) - Number(coreB.split('.')[i] ?? 0)).find((one) => one !== 0);
  return difference ?? Number(preA === undefined) - Number(preB === undefined);
}

/** Whether a version lies in a range such as ">=1.0.0 <1.6.1". @param {string} version @param {string} range */
function inside(version, range) {
  return range.split(' ').every((bound) => {
    const match = /^(>=|<)(\d+\.\d+\.\d+)$/.exec(bound);
    assert(match, `scripts/advisories.json: cannot read the range "${range}"`);
    return match[1] === '>=' ? order(version, match[2]) >= 0 : order(version, match[2]) < 0;
  });
}

/** @param {{ kind: string, name: string, version: string }} one */
function matches({ kind, name, version }) {
  return advisories.filter((entry) => entry.kind === kind && entry.package === name && inside(version, entry.bad));
}

assert(inside('1.6.0', '>=1.0.0 <1.6.1') && !inside('1.6.1', '>=1.0.0 <1.6.1') && !inside('0.9.0', '>=1.0.0 <1.6.1'));
assert(inside('1.10.0-beta.1', '<1.10.0') && !inside('1.10.0', '<1.9.0'));
assert.equal(matches({ kind: 'crate', name: 'nalgebra', version: '0.26.2' })[0]?.id, 'RUSTSEC-2021-0070');

const all = packages();
const hits = all.flatMap((one) => matches(one).map((entry) => `   ${one.kind} ${one.name} ${one.version}: ${entry.id}, ${entry.what}`));
for (const hit of hits) console.error(hit);
console.log(`   ${all.length} packages against ${advisories.length} entries (reviewed ${reviewed}), ${hits.length} matched`);
process.exitCode = hits.length ? 1 : 0;
