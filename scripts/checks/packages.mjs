// Every package that the two lock files bring, for the licence and the advisory check. Works offline.

import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

export const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));

/** @typedef {{ kind: 'crate'|'npm', name: string, version: string, licence: string, shipped: boolean }} Package */

const HOST = /host: (\S+)/.exec(execFileSync('rustc', ['-vV'], { encoding: 'utf8' }))?.[1] ?? '';

/** @returns {Package[]} */
export function packages() {
  return [...crates(), ...npmPackages()];
}

/** Shipped is what the page and the command are built from. @returns {Package[]} */
function crates() {
  const shipped = new Set([...tree('bandleaf', HOST), ...tree('bandleaf-wasm', 'wasm32-unknown-unknown')]);
  /** @type {Map<string, Package>} */
  const found = new Map();
  for (const platform of [HOST, 'wasm32-unknown-unknown']) {
    const metadata = JSON.parse(cargo('metadata', '--format-version', '1', '--filter-platform', platform));
    const here = new Set(metadata.resolve.nodes.map((/** @type {{ id: string }} */ node) => node.id));
    for (const { id, name, version, license, source } of metadata.packages) {
      if (!source || !here.has(id)) continue;
      found.set(id, { kind: 'crate', name, version, licence: license ?? '', shipped: shipped.has(`${name} v${version}`) });
    }
  }
  return [...found.values()];
}

/** @param {string} name @param {string} target */
function tree(name, target) {
  const lines = cargo('tree', '--package', name, '--target', target, '--edges', 'normal', '--prefix', 'none', '--format', '{p}');
  return lines.split('\n').map((line) => line.split(' ').slice(0, 2).join(' '));
}

/** @param {...string} args */
function cargo(...args) {
  return execFileSync('cargo', [...args, '--locked', '--offline'], { cwd: root, encoding: 'utf8', maxBuffer: 1 << 28 });
}

/** @returns {Package[]} */
function npmPackages() {
  const lock = JSON.parse(readFileSync(join(root, 'web', 'package-lock.json'), 'utf8'));
  return Object.entries(lock.packages)
    .filter(([path]) => path.startsWith('node_modules/'))
    .map(([path, { version, license, dev }]) => ({
      kind: 'npm',
      name: path.slice(path.lastIndexOf('node_modules/') + 'node_modules/'.length),
      version,
      licence: license ?? '',
      shipped: !dev,
    }));
}
