// Starts the core: checks its bytes against the seal, unpacks them, hands out its functions.
//
// The core lies outside the page's script policy, so it is hashed before it is started. @noble/hashes: small, audited,
// for where the browser's own digest is absent.

/** @import { Core, Texts } from './types.js' */
import { sha256 } from '@noble/hashes/sha2.js';
import { bytesToHex, utf8ToBytes } from '@noble/hashes/utils.js';
import init, * as wasm from '../pkg/bandleaf_wasm.js';

/** The page cannot go on; `altered` where a part of the file is not the one that was sealed. */
export class StartError extends Error {
  /**
   * @param {string} sentence
   * @param {boolean} altered
   */
  constructor(sentence, altered) {
    super(sentence);
    this.altered = altered;
  }
}

/**
 * @param {Texts} texts
 * @returns {Promise<Core>}
 */
export async function startCore(texts) {
  if (typeof WebAssembly !== 'object')
    throw new StartError(
      'This browser does not run WebAssembly, which the calculation needs. Open the file in a current Chromium, Chrome, Edge or Firefox, or ask whoever looks after this computer to allow it.',
      false,
    );
  if (typeof DecompressionStream !== 'function')
    throw new StartError(
      'This browser is too old to unpack the calculation. Open the file in Chromium, Chrome or Edge 109 or newer, or in Firefox 115 or newer.',
      false,
    );
  if (!sealedDigest(texts.seal))
    throw new StartError('The seal of this file cannot be read: the file was changed or cut short. Ask for the original file.', true);
  // Unpacked while it is hashed; nothing of it runs before the digest has been compared.
  const unpacked = unpack(texts.wasm).catch((cause) => cause);
  if ((await digestOf(texts.wasm)) !== sealedDigest(texts.seal))
    throw new StartError(
      'The calculation inside this file is not the one that was sealed: the section “wasm” was changed. Ask for the original file.',
      true,
    );
  try {
    const bytes = await unpacked;
    if (!(bytes instanceof Uint8Array)) throw bytes;
    return await startWith(bytes);
  } catch (cause) {
    throw new StartError(
      `The calculation could not be started (${cause instanceof Error ? cause.message : cause}). Open the file in another browser, or ask for the original file.`,
      false,
    );
  }
}

/**
 * The core from its bytes.
 * @param {Uint8Array} bytes
 * @returns {Promise<Core>}
 */
export async function startWith(bytes) {
  await init({ module_or_path: bytes });
  const { initSync: _, default: __, ...functions } = /** @type {any} */ (wasm);
  return Object.freeze({ ...functions });
}

/**
 * The bytes of the core from the text that carries them: base64 of raw deflate.
 * @param {string} text
 */
export async function unpack(text) {
  return inflate(decodeBase64(text));
}

/**
 * The digest of the core that the seal names; null where the seal cannot be read.
 * @param {string} seal
 * @returns {string|null}
 */
function sealedDigest(seal) {
  try {
    return JSON.parse(seal).digests.wasm ?? null;
  } catch {
    return null;
  }
}

/** By the browser's own digest where it has one, since the page waits for it. @param {string} text */
async function digestOf(text) {
  const bytes = utf8ToBytes(text);
  const digest = globalThis.crypto?.subtle ? new Uint8Array(await crypto.subtle.digest('SHA-256', bytes)) : sha256(bytes);
  return `sha256:${bytesToHex(digest)}`;
}

/** By the browser's own decoder where it has one. @param {string} text @returns {Uint8Array<ArrayBuffer>} */
function decodeBase64(text) {
  const { fromBase64 } = /** @type {any} */ (Uint8Array);
  if (typeof fromBase64 === 'function') return fromBase64.call(Uint8Array, text);
  const binary = atob(text);
  const bytes = new Uint8Array(binary.length);
  for (let i = 0; i < binary.length; i += 1) bytes[i] = binary.charCodeAt(i);
  return bytes;
}

/**
 * @param {Uint8Array<ArrayBuffer>} bytes
 */
async function inflate(bytes) {
  const { readable, writable } = new DecompressionStream('deflate-raw');
  const writer = writable.getWriter();
  const [, unpacked] = await Promise.all([writer.write(bytes).then(() => writer.close()), new Response(readable).arrayBuffer()]);
  return new Uint8Array(unpacked);
}
