// Refuses packages whose licence is not on the list in scripts/licences.json. Works offline.

import assert from 'node:assert';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { packages, root } from './packages.mjs';

/** @type {{ shipped: string[], tools_only: string[] }} */
const allowed = JSON.parse(readFileSync(join(root, 'scripts', 'licences.json'), 'utf8'));

/**
 * Whether an SPDX expression can be met: of an OR one side, of an AND every part.
 * @param {string} expression
 * @param {string[]} list
 */
function met(expression, list) {
  const parts = expression.replace(/[()]/g, ' ').split(/\s+AND\s+/);
  return parts.every((part) => part.split(/\s+OR\s+|\//).some((choice) => list.includes(choice.trim())));
}

const { shipped, tools_only: toolsOnly } = allowed;
assert(met('MIT OR GPL-3.0-only', shipped) && met('(MIT OR Apache-2.0) AND Unicode-3.0', shipped));
assert(!met('GPL-3.0-only', shipped) && !met('MIT AND GPL-3.0-only', shipped) && !met('', shipped) && !met('MPL-2.0', shipped));

const all = packages();
const refused = all.filter((one) => !met(one.licence, one.shipped ? shipped : [...shipped, ...toolsOnly]));
for (const one of refused)
  console.error(`   ${one.kind} ${one.name} ${one.version}: "${one.licence}" is not on the list in scripts/licences.json`);
console.log(`   ${all.length} packages, ${all.filter((one) => one.shipped).length} of them shipped, ${refused.length} refused`);
process.exitCode = refused.length ? 1 : 0;
