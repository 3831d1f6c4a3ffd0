// Refuses a page in which a builder's path stands: in the text of the page or in its unpacked WebAssembly.

import assert from 'node:assert';
import { readFileSync } from 'node:fs';
import { homedir } from 'node:os';
import { join } from 'node:path';
import { root } from './packages.mjs';
import { pagePart } from './page-part.mjs';

const places = [root, homedir(), '/home/', '/root/', '/Users/', '/usr/lib/', '/.cargo/', '/.rustup/', 'C:\\'];

/** @param {Buffer} bytes */
function paths(bytes) {
  return places.filter((place) => bytes.includes(place));
}

assert.deepEqual(paths(Buffer.from(`panicked at ${root}/crates/core/src/lib.rs`)).includes(root), true);

const found = [...paths(readFileSync(join(root, 'dist', 'bandleaf.html'))), ...paths(pagePart('wasm'))];
if (found.length) console.error(`   A builder's path is in the page: ${found.join(', ')}`);
else console.log("   no builder's path in the page");
process.exitCode = found.length ? 1 : 0;
