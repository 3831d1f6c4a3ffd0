// Deflates a file as small as the format allows: raw deflate, which every browser unpacks by itself.
//   node web/deflate.mjs IN OUT
//
// @gfx/zopfli, because its output is some 6 % smaller than zlib's and the page has a budget; Node unpacks the result to check it.

import assert from 'node:assert';
import { readFileSync, writeFileSync } from 'node:fs';
import { inflateRawSync } from 'node:zlib';
import zopfli from '@gfx/zopfli';

const [from, to] = process.argv.slice(2);
const bytes = readFileSync(from);
const deflated = await zopfli.deflateAsync(bytes, { numiterations: 15 });
assert(inflateRawSync(deflated).equals(bytes));
writeFileSync(to, deflated);
