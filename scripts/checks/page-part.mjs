// Writes a part of the built page to standard output: style, shell, seal, visit, wasm (unpacked) or program.
//   node scripts/checks/page-part.mjs PART

import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { inflateRawSync } from 'node:zlib';
import { root } from './packages.mjs';

/** @param {string} part */
export function pagePart(part) {
  const page = readFileSync(join(root, 'dist', 'bandleaf.html'), 'utf8');
  const text = new RegExp(`<(?:script|style)[^>]* id="${part}">([^<]*(?:<(?!/(?:script|style)>)[^<]*)*)</`).exec(page)?.[1];
  if (text === undefined) throw new Error(`The page has no part "${part}".`);
  return part === 'wasm' ? inflateRawSync(Buffer.from(text, 'base64')) : Buffer.from(text, 'utf8');
}

if (process.argv[1] === import.meta.filename) process.stdout.write(pagePart(process.argv[2]));
