// The sheet as a whole: open, start anew, take away, appearance, about.

import { chooseAndOpen, DEMOS, loadDemo, newSheet, replaceBy, saveCurve, saveReport, saveVisit } from './commands.js';
/** @import { Parts } from './store.js' */
/** @import { Draft } from './types.js' */
import { dropDraft, keepDraft, keepMode } from './drafts.js';
import { Choice } from './fields.jsx';
import { PanelFrame } from './panel.jsx';
import { pointsOf } from './visit.js';
import { CAUTION } from './words.js';

/** @param {Parts & { onClose: () => void }} props */
export function SheetPanel({ core, store, state, dispatch, onClose }) {
  const then = (/** @type {() => void} */ action) => () => {
    onClose();
    action();
  };
  const mode = (/** @type {string} */ value) => {
    keepMode(value);
    dispatch({ type: 'show', change: { mode: value } });
  };
  return (
    <PanelFrame title="Sheet" onClose={onClose}>
      <h3>Open</h3>
      <div class="stack">
        <button type="button" onClick={then(() => chooseAndOpen(core, store))}>
          A leaf, a visit or a table of points…
        </button>
        {DEMOS.map((demo) => (
          <button key={demo.name} type="button" onClick={then(() => loadDemo(core, store, demo.visit))}>
            Demo: {demo.name}
            <small>{demo.hint}; invented</small>
          </button>
        ))}
        <button type="button" onClick={then(() => newSheet(store))}>
          New sheet
        </button>
      </div>
      <Drafts {...{ core, store, state, dispatch }} onClose={onClose} />
      <h3>Leave behind</h3>
      <div class="stack">
        <button type="button" onClick={then(() => globalThis.print())}>
          Print…
        </button>
        <button type="button" onClick={then(() => saveVisit(core, store))}>
          Visit as JSON<small>everything that was done and said</small>
        </button>
        <button type="button" onClick={then(() => saveReport(core, store))}>
          Report as JSON<small>everything that follows from it</small>
        </button>
        <button type="button" disabled={!state.report?.fit} onClick={then(() => saveCurve(store))}>
          Curve as CSV<small>both bands, as drawn</small>
        </button>
      </div>
      <Choice
        label="Appearance"
        value={state.mode}
        onChoose={mode}
        options={[
          { value: 'auto', label: 'as the computer is set' },
          { value: 'light', label: 'light' },
          { value: 'dark', label: 'dark' },
          { value: 'sunlight', label: 'sunlight, most contrast' },
        ]}
      />
      <div class="stack">
        <button type="button" onClick={() => dispatch({ type: 'panel', panel: { name: 'about' } })}>
          About this program, caution, licences
        </button>
      </div>
      <p class="hint">{CAUTION}</p>
    </PanelFrame>
  );
}

/** @param {Parts & { onClose: () => void }} props */
export function Drafts({ core, store, state, dispatch, onClose }) {
  if (state.drafts.length === 0) return null;
  const drop = (/** @type {string} */ key) => {
    dropDraft(key);
    dispatch({ type: 'show', change: { drafts: state.drafts.filter((draft) => draft.key !== key) } });
  };
  const resume = (/** @type {Draft} */ draft) => {
    onClose();
    takeUp(core, store, draft);
  };
  return (
    <div class="kept-drafts">
      <h3>Drafts this browser has kept</h3>
      <ul class="plain drafts">
        {state.drafts.map((draft) => (
          <li key={draft.key}>
            <span>
              {draft.title}
              <small>{draftWords(draft)}</small>
            </span>
            <button type="button" class="small" onClick={() => resume(draft)}>
              Take up
            </button>
            <button type="button" class="small" aria-label={`Discard the draft ${draft.title}`} onClick={() => drop(draft.key)}>
              Discard
            </button>
          </li>
        ))}
      </ul>
    </div>
  );
}

/**
 * On an empty sheet, what was there when the last tab closed.
 * @param {Parts} props
 */
export function DraftOffer({ core, store, state, dispatch }) {
  const { drafts, past, visit, opened } = state;
  const newest = drafts[0];
  if (!newest || past.length > 0 || opened || pointsOf(visit).length > 0) return null;
  return (
    <section class="leaf-strip" aria-label="Draft">
      <span>
        This browser has kept a draft: {newest.title}, {draftWords(newest)}.
      </span>
      <button type="button" class="small" onClick={() => takeUp(core, store, newest)}>
        Take it up
      </button>
      {drafts.length > 1 && (
        <button type="button" class="change" onClick={() => dispatch({ type: 'panel', panel: { name: 'sheet' } })}>
          all {drafts.length}
        </button>
      )}
    </section>
  );
}

/**
 * @param {Parts['core']} core
 * @param {Parts['store']} store
 * @param {Draft} draft
 */
function takeUp(core, store, draft) {
  const notice = /** @type {const} */ ({
    level: 'note',
    sentence: 'A draft that this browser had kept. It is not saved: save the leaf when it is done.',
  });
  replaceBy(core, store, draft.visit, 'draft taken up again', notice);
  // It goes on under this tab's name, so the old entry can go.
  if (keepDraft(store.state()) !== null) return;
  dropDraft(draft.key);
  store.dispatch({ type: 'show', change: { drafts: store.state().drafts.filter((other) => other.key !== draft.key) } });
}

/** @param {Draft} draft */
function draftWords(draft) {
  const count = draft.visit.points?.length ?? 0;
  const when = new Intl.DateTimeFormat('en-GB', { dateStyle: 'medium', timeStyle: 'short' }).format(new Date(draft.at));
  return `${count} ${count === 1 ? 'row' : 'rows'}, ${when}`;
}
