// Puts the page together: bundles the program and the style, wraps all in the shell and seals it.
//   node web/build.mjs --bindings DIR --wasm NAME --out FILE
// where NAME.wasm is the optimised WebAssembly and NAME.deflated the same, deflated.
//
// esbuild, because it bundles, minifies and lists what it took in, with nothing to configure. The file's format is
// written down in crates/leaf/src/page.rs; this is the only other place that writes it.

import { createHash } from 'node:crypto';
import { existsSync, mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { dirname, join, relative, resolve } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseArgs } from 'node:util';
import { deflateRawSync } from 'node:zlib';
import { build } from 'esbuild';
import { crates, notices, npmPackages } from './notices.mjs';

const web = dirname(fileURLToPath(import.meta.url));
const root = dirname(web);
const TARGET = ['chrome109', 'firefox115'];

/** Shown until the program removes it: a program that does not run cannot say that it does not. */
const DAMAGED =
  'This file is damaged, or scripts are blocked. Open it in a current Chromium, Chrome, Edge or Firefox with scripts allowed; if this text stays, ask for the original file.';

const ICON =
  "data:image/svg+xml,%3Csvg xmlns='http://www.w3.org/2000/svg' viewBox='0 0 16 16'%3E%3Cpath d='M1 14C4 6 9 3 15 2 14 9 9 13 1 14Z' fill='%23cfe3c8'/%3E%3Cpath d='M1 14C6 8 10 5 15 2' fill='none' stroke='%232f6b3a' stroke-width='1.6'/%3E%3C/svg%3E";

const { values } = parseArgs({
  options: { bindings: { type: 'string' }, wasm: { type: 'string' }, out: { type: 'string' }, source: { type: 'string' } },
});
const bindings = resolve(values.bindings ?? join(web, 'pkg'));
const source = resolve(values.source ?? join(web, 'src'));
const out = resolve(values.out ?? join(root, 'dist', 'bandleaf.html'));
if (!values.wasm) throw new Error('Name the optimised WebAssembly with --wasm, without its ending.');

const { program, noticesText } = await bundleProgram();
const style = checked('style', await bundleStyle());
const raw = readFileSync(`${values.wasm}.wasm`);
const deflated = readFileSync(`${values.wasm}.deflated`);
const wasm = deflated.toString('base64');
const pieces = shellPieces(hash(style, 'base64'), hash(program, 'base64'));
const shell = elementText(pieces);
const file = sealed({ style, shell, wasm, program });
mkdirSync(dirname(out), { recursive: true });
writeChanged(out, file);
writeFileSync(out.replace(/\.html$/, '.sizes.json'), `${JSON.stringify(sizes(), null, 2)}\n`);
console.log(`   ${relative(process.cwd(), out)}: ${Buffer.byteLength(file)} bytes`);

/** Leaves a file alone that is right already, so that what is built from it is not built again. @param {string} path @param {string} content */
function writeChanged(path, content) {
  if (!existsSync(path) || readFileSync(path, 'utf8') !== content) writeFileSync(path, content);
}

/** The size of the page by part, in bytes. */
function sizes() {
  return {
    wasm: raw.length,
    wasm_deflated: deflated.length,
    wasm_deflated_base64: wasm.length,
    program_without_notices: Buffer.byteLength(program) - packed(noticesText).length,
    notices: packed(noticesText).length,
    style: Buffer.byteLength(style),
    page: Buffer.byteLength(file),
  };
}

/** The program with the notices inside, and the notices alone; two passes, since the first tells what is inside. */
async function bundleProgram() {
  const first = await bundle('');
  const noticesText = notices([...crates(root), ...npmPackages(web, Object.keys(first.metafile.inputs))]);
  const second = await bundle(packed(noticesText));
  return { program: checked('script', second.outputFiles[0].text.trimEnd()), noticesText };
}

/** Base64 of raw deflate, as the page unpacks it. @param {string} text */
function packed(text) {
  return deflateRawSync(text, { level: 9, memLevel: 9 }).toString('base64');
}

/** @param {string} noticesText */
function bundle(noticesText) {
  return build({
    entryPoints: [join(source, 'main.jsx')],
    absWorkingDir: web,
    bundle: true,
    write: false,
    metafile: true,
    minify: true,
    charset: 'utf8',
    format: 'iife',
    target: TARGET,
    jsx: 'automatic',
    jsxImportSource: 'preact',
    legalComments: 'none',
    logLevel: 'warning',
    // The bindings name their file beside them; the page hands the bytes over instead.
    define: { 'import.meta.url': '"about:blank"' },
    plugins: [virtualNotices(noticesText), chosenBindings(), droppedStyles()],
  });
}

async function bundleStyle() {
  const result = await build({
    entryPoints: [join(source, 'style.css')],
    absWorkingDir: web,
    bundle: true,
    write: false,
    minify: true,
    charset: 'utf8',
    target: TARGET,
    legalComments: 'none',
    logLevel: 'warning',
  });
  return result.outputFiles[0].text.trimEnd();
}

/**
 * `import notices from 'bandleaf:notices'` in the program.
 * @param {string} text
 * @returns {import('esbuild').Plugin}
 */
function virtualNotices(text) {
  return {
    name: 'notices',
    setup(build) {
      build.onResolve({ filter: /^bandleaf:notices$/ }, () => ({ path: 'notices', namespace: 'bandleaf' }));
      build.onLoad({ filter: /.*/, namespace: 'bandleaf' }, () => ({ contents: text, loader: 'text' }));
    },
  };
}

/** The program imports `../pkg/…`; a second build, to compare with, has its bindings elsewhere. @returns {import('esbuild').Plugin} */
function chosenBindings() {
  return {
    name: 'bindings',
    setup(build) {
      build.onResolve({ filter: /\/pkg\/bandleaf_wasm\.js$/ }, () => ({ path: join(bindings, 'bandleaf_wasm.js') }));
    },
  };
}

/** The style has an element of its own. @returns {import('esbuild').Plugin} */
function droppedStyles() {
  return {
    name: 'styles',
    setup(build) {
      build.onLoad({ filter: /\.css$/ }, () => ({ contents: '', loader: 'js' }));
    },
  };
}

/**
 * Refuses text that would end its element early, or that a transfer may change.
 * @param {'script'|'style'} element
 * @param {string} text
 */
function checked(element, text) {
  for (const forbidden of [new RegExp(`</${element}`, 'i'), /<!--/, /\r/]) {
    const at = text.search(forbidden);
    if (at >= 0) throw new Error(`The ${element} must not hold ${forbidden}: …${text.slice(Math.max(0, at - 40), at + 40)}…`);
  }
  return text;
}

/**
 * The seven pieces around style, shell, seal, visit, wasm and program.
 * @param {string} styleHash
 * @param {string} programHash
 */
function shellPieces(styleHash, programHash) {
  const policy = [
    "default-src 'none'",
    `script-src 'sha256-${programHash}' 'wasm-unsafe-eval'`,
    `style-src 'sha256-${styleHash}'`,
    'img-src blob: data:',
    'worker-src blob:',
    "base-uri 'none'",
    "form-action 'none'",
  ].join('; ');
  return [
    [
      '<!doctype html>',
      '<html lang="en">',
      '<head>',
      '<meta charset="utf-8">',
      `<meta http-equiv="Content-Security-Policy" content="${policy}">`,
      '<meta name="viewport" content="width=device-width, initial-scale=1">',
      '<meta name="color-scheme" content="light dark">',
      '<title>Bandleaf</title>',
      `<link rel="icon" href="${ICON}">`,
      '<style id="style">',
    ].join('\n'),
    `</style>\n</head>\n<body>\n<p id="damaged">${DAMAGED}</p>\n<script type="application/json" id="shell">`,
    '</script>\n<script type="application/json" id="seal">',
    '</script>\n<script type="application/json" id="visit">',
    '</script>\n<script type="text/plain" id="wasm">',
    '</script>\n<script id="program">',
    '</script>\n</body>\n</html>',
  ];
}

/**
 * The whole file with its seal. The digest of the file is that of the file with this digest's digits as zeros.
 * @param {{ style: string, shell: string, wasm: string, program: string }} texts
 */
function sealed({ style, shell, wasm, program }) {
  const seal = (/** @type {string} */ digits) =>
    elementText({
      digests: { program: digest(program), report: null, shell: digest(shell), style: digest(style), visit: null, wasm: digest(wasm) },
      file: `sha256:${digits}`,
      program: { method: method(), name: 'bandleaf', version: version() },
      report: null,
      schema: 'bandleaf.leaf.1',
    });
  const assemble = (/** @type {string} */ sealText) => {
    const texts = [style, shell, sealText, 'null', wasm, program, ''];
    return pieces.map((piece, i) => piece + texts[i]).join('');
  };
  return assemble(seal(hash(assemble(seal('0'.repeat(64))), 'hex')));
}

/** JSON that cannot end its element: keys are given in sorted order, numbers are whole, as RFC 8785 wants them. @param {unknown} value */
function elementText(value) {
  return JSON.stringify(value).replaceAll('<', '\\u003c').replaceAll('\u2028', '\\u2028').replaceAll('\u2029', '\\u2029');
}

/** @param {string} text @param {'hex'|'base64'} encoding */
function hash(text, encoding) {
  return createHash('sha256').update(text, 'utf8').digest(encoding);
}

/** @param {string} text */
function digest(text) {
  return `sha256:${hash(text, 'hex')}`;
}

/** The program's version, of which Cargo.toml is the one place. */
function version() {
  return found(join(root, 'Cargo.toml'), /\[workspace\.package\][^[]*?\nversion = "([^"]+)"/);
}

/** The version of the method, of which the report type is the one place. */
function method() {
  return Number(found(join(root, 'crates/core/src/report.rs'), /pub const METHOD: u32 = (\d+);/));
}

/** @param {string} path @param {RegExp} pattern */
function found(path, pattern) {
  const match = pattern.exec(readFileSync(path, 'utf8'));
  if (!match) throw new Error(`${path} does not hold ${pattern}.`);
  return match[1];
}
