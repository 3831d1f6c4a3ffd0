// The state of the page, in one place: action → visit → report → draw. One reducer says what an action does; after it
// the store asks the core for whatever follows from the new visit or the new reading, so that nothing shown is stale.

/** @import { Action, Answer, Asked, Core, Notice, Opened, State, Visit } from './types.js' */
import { firstUnread, readPieces } from './cells.js';
import { drawnRange } from './picture-range.js';
import { influencesOf, pointsOf } from './visit.js';

const STEPS = 500;
const PLACES = 241;
const MANY_ROWS = 3000;

/**
 * @param {Core} core
 * @param {{ visit: Visit, origin: string, stage: State['stage'], opened: Opened|null, mode: string }} start
 */
export function createStore(core, { visit, origin, stage, opened, mode }) {
  /** @type {import('./types.js').Appraisal|null} */
  let appraisal = null;
  /** @type {Set<() => void>} */
  const listeners = new Set();
  /** @type {State} */
  let state = {
    visit,
    origin,
    revision: 0,
    past: [],
    future: [],
    lastMerge: null,
    saved: null,
    report: null,
    drawn: null,
    asFoundCurve: null,
    unread: null,
    busy: false,
    said: '',
    reading: firstReading(visit),
    answer: { problem: null, alternatives: null, value: null },
    view: 'error',
    panel: null,
    notice: null,
    notesOpen: false,
    entering: enteringOf(visit),
    firstRow: 0,
    opened,
    stage,
    drafts: [],
    mode,
  };
  state = answered(appraised(state));

  /** @param {Action} action */
  function dispatch(action) {
    const next = reduce(state, action);
    if (next === state) return;
    state = settle(next, state);
    for (const listener of listeners) listener();
  }

  /**
   * @param {State} next
   * @param {State} previous
   * @returns {State}
   */
  function settle(next, previous) {
    if (next.visit !== previous.visit) {
      if (pointsOf(next.visit).length > MANY_ROWS) return postponed(next, previous);
      try {
        return answered(appraised({ ...next, busy: false }));
      } catch (problem) {
        return { ...previous, notice: refusal(problem) };
      }
    }
    return next.reading === previous.reading ? next : answered(next);
  }

  /**
   * Long tables: the page is drawn first, then the core is asked, so that typing never waits.
   * @param {State} next
   * @param {State} previous
   * @returns {State}
   */
  function postponed(next, previous) {
    setTimeout(() => {
      if (state.visit !== next.visit) return;
      try {
        state = answered(appraised({ ...state, busy: false }));
      } catch (problem) {
        state = { ...previous, notice: refusal(problem) };
      }
      for (const listener of listeners) listener();
    }, 30);
    return { ...next, busy: true };
  }

  /**
   * @param {State} next
   * @returns {State}
   */
  function appraised(next) {
    if (next.stage === 'altered') return next;
    const handle = core.appraise(next.visit);
    const report = handle.outline();
    appraisal?.free();
    appraisal = handle;
    const [first, last] = drawnRange(next.visit, report);
    const rows = report.fit ? handle.curve(first, last, PLACES) : new Float64Array();
    const asFoundCurve = report.as_found ? (handle.report().as_found?.curve ?? null) : null;
    return { ...next, report, drawn: { first, last, rows }, asFoundCurve, unread: firstUnread(core, next.visit) };
  }

  /**
   * @param {State} next
   * @returns {State}
   */
  function answered(next) {
    return { ...next, answer: answer(core, appraisal, next) };
  }

  return {
    dispatch,
    state: () => state,
    /** @param {() => void} listener */
    subscribe(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    /**
     * Rows of eight numbers over places, from the fit that is shown.
     * @param {number} first
     * @param {number} last
     * @param {number} count
     */
    curve: (first, last, count) => appraisal?.curve(first, last, count) ?? new Float64Array(),
  };
}

/**
 * What an action does to the state, before the core is asked.
 * @param {State} state
 * @param {Action} action
 * @returns {State}
 */
function reduce(state, action) {
  switch (action.type) {
    case 'edit':
      return edited(state, action.visit, action.what, action.merge ?? null);
    case 'replace':
      return {
        ...edited(state, action.visit, action.what, null),
        origin: action.origin,
        opened: null,
        stage: 'sheet',
        panel: null,
        reading: firstReading(action.visit),
        entering: enteringOf(action.visit),
        firstRow: 0,
        notice: action.notice ?? null,
      };
    case 'undo':
      return stepped(state, state.past, 'past', 'future');
    case 'redo':
      return stepped(state, state.future, 'future', 'past');
    case 'reading':
      return { ...state, reading: { ...state.reading, text: action.text } };
    case 'reading-influence':
      return { ...state, reading: { ...state.reading, influences: { ...state.reading.influences, [action.name]: action.text } } };
    case 'pressed':
      return { ...state, saved: state.visit, notice: action.notice };
    case 'panel':
      return { ...state, panel: action.panel };
    case 'notice':
      return { ...state, notice: action.notice };
    case 'show':
      return { ...state, ...action.change };
    default:
      return state;
  }
}

/**
 * @param {State} state
 * @param {Visit} visit
 * @param {string} what
 * @param {string|null} merge changes of one thing in a row, such as a cell being typed, are one step
 * @returns {State}
 */
function edited(state, visit, what, merge) {
  if (visit === state.visit) return state;
  const kept = { ...state, visit, revision: state.revision + 1, future: [], lastMerge: merge, notice: passing(state.notice), said: '' };
  if (merge !== null && merge === state.lastMerge && state.past.length > 0) return kept;
  const step = { visit: state.visit, origin: state.origin, what, merge };
  return { ...kept, past: [...state.past.slice(1 - STEPS), step] };
}

/**
 * A note goes with the next change; a warning or refusal stays until it is closed.
 * @param {Notice|null} notice
 */
function passing(notice) {
  return notice?.level === 'note' ? null : notice;
}

/**
 * @param {State} state
 * @param {State['past']} steps
 * @param {'past'|'future'} from
 * @param {'past'|'future'} to
 * @returns {State}
 */
function stepped(state, steps, from, to) {
  const step = steps.at(-1);
  if (!step) return state;
  const here = { ...step, visit: state.visit, origin: state.origin };
  return {
    ...state,
    visit: step.visit,
    origin: step.origin,
    revision: state.revision + 1,
    lastMerge: null,
    [from]: steps.slice(0, -1),
    [to]: [...state[to], here],
    notice: passing(state.notice),
    said: `${from === 'past' ? 'Undone' : 'Done again'}: ${step.what}.`,
  };
}

/**
 * The reading as a value. It touches neither the visit nor its undo.
 * @param {Core} core
 * @param {import('./types.js').Appraisal|null} appraisal
 * @param {State} state
 * @returns {Answer}
 */
function answer(core, appraisal, { visit, report, reading }) {
  const { values, alternatives, sentence } = readPieces(core, reading.text);
  if (!values) return { problem: sentence, alternatives, value: null };
  /** @type {Record<string, number>} */
  const influences = {};
  for (const name of influencesOf(visit)) {
    const text = reading.influences[name] ?? '';
    if (text.trim() === '') continue;
    const pieces = readPieces(core, text);
    if (pieces.values?.length !== 1)
      return { problem: `${name}: ${pieces.sentence ?? 'write one number that reads in one way only.'}`, alternatives: null, value: null };
    influences[name] = pieces.values[0];
  }
  if (!appraisal || !report?.fit) return { problem: 'There is no curve yet to read a value from.', alternatives: null, value: null };
  try {
    return { problem: null, alternatives: null, value: appraisal.read({ indications: values, influences }) };
  } catch (problem) {
    return { problem: refusal(problem).sentence, alternatives: null, value: null };
  }
}

/**
 * @param {Visit} visit
 * @returns {State['reading']}
 */
function firstReading(visit) {
  const asked = /** @type {Asked|undefined} */ (visit.ask?.readings?.[0]);
  if (asked === undefined) return { text: '', influences: {} };
  if (typeof asked === 'number') return { text: String(asked), influences: {} };
  if (Array.isArray(asked)) return { text: asked.join('; '), influences: {} };
  const influences = Object.fromEntries(Object.entries(asked.influences ?? {}).map(([name, value]) => [name, String(value)]));
  return { text: asked.indications.join('; '), influences };
}

/** @param {Visit} visit */
function enteringOf(visit) {
  return pointsOf(visit).at(-1)?.state ?? 'as_found';
}

/**
 * @param {unknown} problem
 * @returns {Notice}
 */
export function refusal(problem) {
  const { sentence, message } = /** @type {{ sentence?: string, message?: string }} */ (problem ?? {});
  return { level: 'error', sentence: sentence ?? `This could not be done (${message ?? problem}); the sheet stays as it was.` };
}

/** @typedef {ReturnType<typeof createStore>} Store */
/** @typedef {Store['dispatch']} Dispatch */
/** @typedef {{ core: Core, store: Store, state: State, dispatch: Dispatch }} Parts what every part of the page is given */
