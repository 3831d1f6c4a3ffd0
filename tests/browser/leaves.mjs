// Files for the tests: leaves pressed by the release binary, and the same with something changed.

import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { command, root, temporaryDirectory } from './harness.mjs';

export const demoVisit = join(root, 'web', 'demo', 'header-tank.json');

/** The demo visit, pressed. */
export function pressedDemo() {
  const file = join(temporaryDirectory(), 'leaf.html');
  command(['press', demoVisit, '--out', file]);
  return readFileSync(file, 'utf8');
}

/**
 * The text of an element of a page or leaf.
 * @param {string} file
 * @param {string} id
 */
export function elementText(file, id) {
  const [, text] = new RegExp(`<(?:script|style)[^>]* id="${id}">([\\s\\S]*?)</(?:script|style)>`).exec(file) ?? [];
  if (text === undefined) throw new Error(`no element "${id}"`);
  return text;
}

/**
 * The file with the text of one element changed.
 * @param {string} file
 * @param {string} id
 * @param {(text: string) => string} change
 */
export function withElement(file, id, change) {
  const text = elementText(file, id);
  const changed = change(text);
  if (changed === text) throw new Error(`the element "${id}" was not changed`);
  const at = file.indexOf('>', file.indexOf(`id="${id}"`)) + 1;
  return file.slice(0, at) + changed + file.slice(at + text.length);
}

/**
 * The file with another report in its seal, and every digest made right again: consistent, and yet wrong.
 * @param {string} file
 * @param {(report: any) => void} change
 */
export function withReport(file, change) {
  const seal = JSON.parse(elementText(file, 'seal'));
  const before = JSON.stringify(seal.report);
  change(seal.report);
  if (JSON.stringify(seal.report) === before) throw new Error('the report was not changed');
  seal.digests.report = `sha256:${sha256(canonical(seal.report))}`;
  seal.file = `sha256:${'0'.repeat(64)}`;
  const text = () => canonical(seal).replaceAll('<', '\\u003c').replaceAll('\u2028', '\\u2028').replaceAll('\u2029', '\\u2029');
  const blanked = withElement(file, 'seal', text);
  seal.file = `sha256:${sha256(blanked)}`;
  return withElement(file, 'seal', text);
}

/** RFC 8785: JSON with sorted keys; the numbers and strings of ECMAScript are already as it wants them. @param {any} value @returns {string} */
function canonical(value) {
  if (Array.isArray(value)) return `[${value.map(canonical).join(',')}]`;
  if (value === null || typeof value !== 'object') return JSON.stringify(value);
  const fields = Object.keys(value).sort();
  return `{${fields.map((key) => `${JSON.stringify(key)}:${canonical(value[key])}`).join(',')}}`;
}

/** @param {string} text */
function sha256(text) {
  return createHash('sha256').update(text, 'utf8').digest('hex');
}
