// Prints the size of the page by part and refuses a page over its budget.

import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { root } from './packages.mjs';

const BUDGET = 500_000;
/** @type {Record<string, number>} */
const sizes = JSON.parse(readFileSync(join(root, 'dist', 'bandleaf.sizes.json'), 'utf8'));
const page = readFileSync(join(root, 'dist', 'bandleaf.html')).length;

for (const [part, bytes] of Object.entries(sizes))
  console.log(`   ${part.replaceAll('_', ' ').padEnd(26)} ${String(bytes).padStart(8)} bytes`);
console.log(`   budget ${BUDGET} bytes, ${BUDGET - page} left`);
if (page > BUDGET) {
  console.error('   The page is over its budget.');
  process.exitCode = 1;
}
