// Drafts: what was on the sheet when the tab closed. Kept by this browser, offered again, never called saved.
//
// localStorage, because its writes are done when the call returns, also while the page is being closed. Chromium under
// file:// shares it among all local pages, so a draft is keyed by the visit it grew from and by the tab, and what is
// read back is treated like any file from outside.

/** @import { Core, Draft, State, Visit } from './types.js' */

const PREFIX = 'bandleaf.draft.1/';
const MODE = 'bandleaf.mode';
const KEPT = 6;

const tab = Array.from(crypto.getRandomValues(new Uint8Array(6)), (byte) => byte.toString(16).padStart(2, '0')).join('');

/**
 * Writes the draft of this tab.
 * @param {State} state
 * @returns {string|null} a sentence where the browser refuses
 */
export function keepDraft(state) {
  try {
    const draft = { at: new Date().toISOString(), revision: state.revision, origin: state.origin, visit: state.visit };
    localStorage.setItem(keyOf(state.origin), JSON.stringify(draft));
    prune();
    return null;
  } catch {
    return 'This browser keeps no draft of the sheet (its storage is full or blocked): save the leaf before you close the tab.';
  }
}

/**
 * The drafts that belong to this page: of the same visit for a leaf, all for a blank page. Newest first.
 * @param {Core} core
 * @param {string|null} origin digest of the leaf's visit, null on the blank page
 * @returns {Draft[]}
 */
export function findDrafts(core, origin) {
  return draftKeys()
    .map((key) => readDraft(core, key))
    .filter((draft) => draft !== null)
    .filter((draft) => origin === null || draft.origin === origin)
    .sort((a, b) => b.at.localeCompare(a.at));
}

/** @param {string} key */
export function dropDraft(key) {
  try {
    localStorage.removeItem(key);
  } catch {
    // Where storage is blocked there is nothing to remove.
  }
}

/** The chosen appearance. */
export function keptMode() {
  try {
    return localStorage.getItem(MODE) ?? 'auto';
  } catch {
    return 'auto';
  }
}

/** @param {string} mode */
export function keepMode(mode) {
  try {
    localStorage.setItem(MODE, mode);
  } catch {
    // The appearance then lasts as long as the tab.
  }
}

/** @param {string} origin */
function keyOf(origin) {
  return `${PREFIX}${origin}/${tab}`;
}

function draftKeys() {
  try {
    return Object.keys(localStorage).filter((key) => key.startsWith(PREFIX));
  } catch {
    return [];
  }
}

/**
 * @param {Core} core
 * @param {string} key
 * @returns {Draft|null}
 */
function readDraft(core, key) {
  try {
    const { at, revision, origin, visit } = JSON.parse(localStorage.getItem(key) ?? 'null');
    if (typeof at !== 'string' || !Number.isFinite(Date.parse(at)) || typeof origin !== 'string') return null;
    const clean = /** @type {Visit} */ (JSON.parse(core.canonical(visit)));
    const named = clean.instrument?.name;
    const title = typeof named === 'string' && named !== '' ? named : 'Sheet without a name';
    core.appraise(clean).free();
    return { key, at, revision: Number(revision) || 0, origin, title, visit: clean };
  } catch {
    return null;
  }
}

function prune() {
  const dated = draftKeys().map((key) => ({ key, at: dateIn(localStorage.getItem(key) ?? '') }));
  const old = dated.sort((a, b) => b.at.localeCompare(a.at)).slice(KEPT);
  for (const { key } of old) localStorage.removeItem(key);
}

/** @param {string} text */
function dateIn(text) {
  return /"at":"([^"]*)"/.exec(text)?.[1] ?? '';
}
