// Starts the page: the core is checked and started, the visit inside is opened, the sheet or the leaf is drawn.

/** @import { Core, Opened, State, Texts, Visit } from './types.js' */
/** @import { Store } from './store.js' */
import { options, render } from 'preact';
import { StartError, startCore } from './bindings.js';
import { today } from './commands.js';
import { findDrafts, keepDraft, keptMode } from './drafts.js';
import { saveFile } from './files.js';
import { createHelper, serve } from './helper.js';
import { ownTexts } from './own.js';
import { Sheet } from './sheet.jsx';
import { createStore, refusal } from './store.js';
import { blankVisit } from './visit.js';
import { isSound } from './words.js';

const DRAFT_AFTER = 400;

if (typeof document === 'undefined') serve();
else start();

async function start() {
  const root = document.documentElement;
  root.dataset.state = 'starting';
  root.dataset.mode = keptMode();
  const texts = ownTexts();
  const place = mount();
  // Drawn at once: the next cell is there when Enter moves on to it, and no key typed meanwhile is lost.
  options.debounceRendering = (draw) => draw();
  try {
    const core = await startCore(texts);
    /** @type {any} */ (globalThis).bandleaf = core;
    const store = createStore(core, createHelper(texts), opening(core, texts));
    const shownFirst = store.state();
    render(<Sheet core={core} store={store} />, place);
    root.dataset.state = shownFirst.stage === 'altered' ? 'altered' : 'ready';
    watch(store);
    const origin = shownFirst.opened?.visit ? shownFirst.origin : null;
    store.dispatch({ type: 'show', change: { drafts: findDrafts(core, origin) } });
  } catch (problem) {
    refuse(place, texts, problem);
  }
}

/** The page without the sentence that stands there while scripts have not run. */
function mount() {
  document.getElementById('damaged')?.remove();
  const place = document.createElement('div');
  place.id = 'page';
  document.body.append(place);
  return place;
}

/**
 * What the page starts with: the visit inside, or an empty sheet.
 * @param {Core} core
 * @param {Texts} texts
 * @returns {{ visit: Visit, origin: string, stage: State['stage'], opened: Opened|null, mode: string }}
 */
function opening(core, texts) {
  const opened = openedTexts(core, texts);
  const mode = keptMode();
  const blank = blankVisit(today());
  if (!isSound(opened)) return { visit: blank, origin: 'blank', stage: 'altered', opened, mode };
  if (!opened.visit) return { visit: blank, origin: 'blank', stage: 'sheet', opened: null, mode };
  return { visit: opened.visit, origin: core.digest(opened.visit), stage: 'leaf', opened, mode };
}

/**
 * @param {Core} core
 * @param {Texts} texts
 * @returns {Opened}
 */
function openedTexts(core, texts) {
  try {
    return core.open_texts(texts);
  } catch (problem) {
    return { visit: null, outcome: 'altered', sentence: refusal(problem).sentence, changed: [], field: null };
  }
}

/**
 * Keeps drafts, the appearance and the first-value mark up with the state.
 * @param {Store} store
 */
function watch(store) {
  let kept = store.state().visit;
  let refused = false;
  let marked = false;
  let timer = 0;
  const keep = () => {
    clearTimeout(timer);
    const state = store.state();
    if (state.visit === kept || state.stage === 'altered') return;
    kept = state.visit;
    const sentence = keepDraft(state);
    if (sentence && !refused) store.dispatch({ type: 'notice', notice: { level: 'warning', sentence } });
    refused = sentence !== null;
  };
  const follow = () => {
    const { visit, mode, stage, report, answer } = store.state();
    document.title = visit.instrument?.name ? `${visit.instrument.name} – Bandleaf` : 'Bandleaf';
    if (document.documentElement.dataset.mode !== mode) {
      document.documentElement.dataset.mode = mode;
      globalThis.dispatchEvent(new Event('bandleaf-inks'));
    }
    if (visit !== kept) {
      clearTimeout(timer);
      timer = window.setTimeout(keep, DRAFT_AFTER);
    }
    if (!marked && stage !== 'altered' && (report?.fit || answer.value)) {
      marked = true;
      performance.mark('bandleaf-value');
    }
  };
  store.subscribe(follow);
  follow();
  globalThis.addEventListener('pagehide', leave);
  document.addEventListener('visibilitychange', () => document.visibilityState === 'hidden' && leave());
  globalThis.addEventListener('beforeprint', () => inPrint(true));
  globalThis.addEventListener('afterprint', () => inPrint(false));

  function leave() {
    const field = document.activeElement;
    if (field instanceof HTMLElement && field.matches('input, textarea')) field.blur();
    keep();
  }
}

/** @param {boolean} printing */
function inPrint(printing) {
  document.documentElement.toggleAttribute('data-printing', printing);
  globalThis.dispatchEvent(new Event('bandleaf-inks'));
}

/**
 * The reason why nothing can be computed, in words, without the core. The data inside can still be taken away.
 * @param {Element} place
 * @param {Texts} texts
 * @param {unknown} problem
 */
function refuse(place, texts, problem) {
  const altered = problem instanceof StartError && problem.altered;
  document.documentElement.dataset.state = altered ? 'altered' : 'failed';
  const sentence = problem instanceof StartError ? problem.message : refusal(problem).sentence;
  const keep = () => saveFile(texts.visit, 'recovered.visit.json', 'application/json');
  render(
    <main class="altered">
      <h1>{altered ? 'This file is not as it was saved' : 'This page cannot start here'}</h1>
      <p class="lead" role="alert">
        {sentence}
      </p>
      <p>No value is shown.</p>
      {texts.visit.trim() !== 'null' && texts.visit !== '' && (
        <button type="button" onClick={keep}>
          Take the data inside away as JSON, unchecked
        </button>
      )}
    </main>,
    place,
  );
}
