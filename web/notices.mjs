// The third-party notices that stand inside the page: every crate and npm package whose code is in it, with its licence,
// its copyright lines and one copy of each licence text.
//
// Where a package leaves the choice, MIT is chosen (its text is the shortest that asks for attribution).

import { execFileSync } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';

const PREFERRED = ['MIT', 'ISC', '0BSD', 'Zlib', 'BSD-2-Clause', 'BSD-3-Clause', 'Apache-2.0', 'Unicode-3.0', 'CC0-1.0'];

/** Code that the compiler puts into every program. */
const STANDARD_LIBRARY = {
  name: 'Rust standard library',
  version: '',
  licence: 'MIT OR Apache-2.0',
  texts: ['Copyright (c) The Rust Project Contributors'],
};

/**
 * @typedef {{ name: string, version: string, licence: string, texts: string[] }} Package
 */

/**
 * The notices as plain text.
 * @param {Package[]} packages
 */
export function notices(packages) {
  /** @type {Map<string, Package[]>} */
  const byLicence = new Map();
  for (const one of [STANDARD_LIBRARY, ...packages]) {
    for (const licence of chosen(one.licence)) byLicence.set(licence, [...(byLicence.get(licence) ?? []), one]);
  }
  const parts = ['This file holds code of others, under these licences.'];
  for (const licence of [...byLicence.keys()].sort()) {
    const holders = byLicence.get(licence) ?? [];
    const lines = holders.map((one) => [`${one.name} ${one.version}`.trim(), ...copyrightLines(one)].join('\n  '));
    parts.push(`${licence}\n${'='.repeat(licence.length)}`, lines.join('\n'), licenceText(licence, holders));
  }
  return `${parts.join('\n\n')}\n`;
}

/**
 * The licences that apply, one for each AND-ed part of an SPDX expression.
 * @param {string} expression
 */
export function chosen(expression) {
  return expression
    .replace(/[()]/g, ' ')
    .split(/\s+AND\s+/)
    .map((part) => {
      const choices = part
        .trim()
        .split(/\s+OR\s+|\//)
        .map((choice) => choice.trim());
      const best = PREFERRED.find((licence) => choices.includes(licence));
      if (!best) throw new Error(`No known licence in "${expression}".`);
      return best;
    });
}

/** @param {Package} one */
function copyrightLines(one) {
  const lines = one.texts.flatMap((text) => text.split('\n')).map((line) => line.trim().replace(/\s+/g, ' '));
  const found = lines.filter(
    (line) =>
      /^(Portions )?(©|\(c\) ?\d|Copyright (\(c\)|©|\d|[A-Z]))/i.test(line) &&
      !/copyright (owner|notice|holder|license|statement)|\[yyyy\]|\{yyyy\}/i.test(line),
  );
  return [...new Set(found)];
}

/**
 * One copy of a licence's text, from the first package that brings it, without copyright lines and with paragraphs unwrapped.
 * @param {string} licence
 * @param {Package[]} holders
 */
function licenceText(licence, holders) {
  const begins = LICENCE_BEGINS[licence];
  if (!begins) throw new Error(`No way to recognise the text of the licence ${licence}: add it to LICENCE_BEGINS.`);
  const texts = holders.flatMap((one) => one.texts).map((text) => ({ text, at: text.search(begins) }));
  const found = texts.filter(({ at }) => at >= 0).sort((a, b) => a.text.length - b.text.length)[0];
  if (!found) throw new Error(`No package brings the text of the licence ${licence}.`);
  return found.text
    .slice(found.at)
    .replace(/^\s*APPENDIX: How to apply[\s\S]*$/m, '')
    .split(/\n\s*\n/)
    .map((paragraph) => paragraph.trim().replace(/\s+/g, ' '))
    .filter(Boolean)
    .join('\n\n');
}

/** Where the text that all packages share begins, after title and copyright lines. @type {Record<string, RegExp>} */
const LICENCE_BEGINS = {
  MIT: /Permission is hereby granted, free\s+of\s+charge/,
  ISC: /Permission to use, copy, modify,/,
  '0BSD': /Permission to use, copy, modify,/,
  Zlib: /This software is provided 'as-is'/,
  'BSD-2-Clause': /Redistribution and use in source and binary/,
  'BSD-3-Clause': /Redistribution and use in source and binary/,
  'Apache-2.0': /Apache License\s+Version 2\.0/,
  'Unicode-3.0': /UNICODE LICENSE V3/,
};

/**
 * The crates whose code is in the bindings.
 * @param {string} root
 * @returns {Package[]}
 */
export function crates(root) {
  const cargo = (/** @type {string[]} */ ...args) =>
    execFileSync('cargo', args, { cwd: root, encoding: 'utf8', maxBuffer: 1 << 28, stdio: ['ignore', 'pipe', 'ignore'] });
  const tree = cargo(
    'tree',
    '--locked',
    '--offline',
    '--package',
    'bandleaf-wasm',
    '--target',
    'wasm32-unknown-unknown',
    '--edges',
    'normal,no-proc-macro',
    '--prefix',
    'none',
    '--format',
    '{p}',
  );
  const inside = new Set(
    tree
      .trim()
      .split('\n')
      .map((line) => line.split(' ').slice(0, 2).join(' ')),
  );
  /** @type {{ packages: { name: string, version: string, license: string, manifest_path: string, source: string|null }[] }} */
  const metadata = JSON.parse(
    cargo('metadata', '--locked', '--offline', '--format-version', '1', '--filter-platform', 'wasm32-unknown-unknown'),
  );
  return metadata.packages
    .filter((one) => one.source && inside.has(`${one.name} v${one.version}`))
    .map((one) => ({ name: one.name, version: one.version, licence: one.license, texts: licenceFiles(dirname(one.manifest_path)) }));
}

/**
 * The npm packages whose code is in a bundle, from the bundler's list of inputs.
 * @param {string} web
 * @param {string[]} inputs
 * @returns {Package[]}
 */
export function npmPackages(web, inputs) {
  const names = inputs
    .map((input) => /node_modules\/((?:@[^/]+\/)?[^/]+)\/(?!.*node_modules\/)/.exec(input)?.[1])
    .filter((name) => name !== undefined);
  return [...new Set(names)].sort().map((name) => {
    const directory = join(web, 'node_modules', name);
    const { version, license } = JSON.parse(readFileSync(join(directory, 'package.json'), 'utf8'));
    return { name, version, licence: license, texts: licenceFiles(directory) };
  });
}

/** @param {string} directory */
function licenceFiles(directory) {
  return readdirSync(directory, { withFileTypes: true })
    .filter((entry) => entry.isFile() && /^(licen[cs]e|copying|copyright|notice)/i.test(entry.name))
    .map((entry) => entry.name)
    .sort()
    .map((name) => readFileSync(join(directory, name), 'utf8').replaceAll('\r', ''));
}
