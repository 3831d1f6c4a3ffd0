// The state of the page, in one place: action → visit → report → draw. One reducer says what an action does; after it
// the store asks the core for whatever follows from the new visit or the new reading, so that nothing shown is stale.

/** @import { Helper } from './helper.js' */
/** @import { Action, Answer, Asked, Core, Notice, Opened, State, Visit } from './types.js' */
import { readInColumn, readPieces } from './cells.js';
import { follow } from './following.js';
import { influencesOf, pointsOf } from './visit.js';

const STEPS = 500;
const COLUMNS = 8;
const MANY_ROWS = 3000;

/**
 * @param {Core} core
 * @param {Helper} helper for tables so long that the page would wait
 * @param {{ visit: Visit, origin: string, stage: State['stage'], opened: Opened|null, mode: string }} start
 */
export function createStore(core, helper, { visit, origin, stage, opened, mode }) {
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
    followedOf: null,
    reading: firstReading(visit),
    answer: { problem: null, alternatives: null, value: null },
    view: null,
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
    show(settle(next, state));
  }

  /** @param {State} next */
  function show(next) {
    state = next;
    for (const listener of listeners) listener();
  }

  /**
   * @param {State} next
   * @param {State} previous
   * @returns {State}
   */
  function settle(next, previous) {
    if (next.visit === previous.visit) return next.reading === previous.reading ? next : answered(next);
    if (next.visit === previous.followedOf) return answered({ ...next, busy: false });
    return isLong(next.visit) ? postponed(next, previous) : atOnce(next, previous);
  }

  /**
   * @param {State} next
   * @param {State} previous what stays where the core refuses
   * @returns {State}
   */
  function atOnce(next, previous) {
    try {
      return answered(appraised({ ...next, busy: false }));
    } catch (problem) {
      return { ...previous, notice: refusal(problem) };
    }
  }

  /**
   * Long tables: the page stays in use while the helper works; where there can be no helper, the page works itself.
   * @param {State} next
   * @param {State} previous
   * @returns {State}
   */
  function postponed(next, previous) {
    helper.follow(next.visit).then(
      (followed) => {
        if (state.visit !== next.visit) return;
        appraisal?.free();
        appraisal = null;
        show(answered({ ...state, ...followed, busy: false, followedOf: next.visit }));
      },
      (problem) => {
        if (problem !== null && state.visit === next.visit)
          show(problem instanceof Error ? atOnce(state, previous) : { ...previous, notice: refusal(problem) });
      },
    );
    return answered({ ...next, busy: true });
  }

  /**
   * @param {State} next
   * @returns {State}
   */
  function appraised(next) {
    if (next.stage === 'altered') return next;
    const { appraisal: handle, followed } = follow(core, next.visit);
    helper.stop();
    appraisal?.free();
    appraisal = handle;
    return { ...next, ...followed, followedOf: next.visit };
  }

  /**
   * The reading as a value. It touches neither the visit nor its undo.
   * @param {State} next
   * @returns {State}
   */
  function answered(next) {
    if (next.busy) return { ...next, answer: { problem: 'Computing; the value follows.', alternatives: null, value: null } };
    const { problem, alternatives, reading } = question(core, next);
    if (!reading) return { ...next, answer: { problem, alternatives, value: null } };
    if (!appraisal) {
      readBeside(next, reading);
      return next;
    }
    try {
      return { ...next, answer: { problem: null, alternatives: null, value: appraisal.read(reading) } };
    } catch (cause) {
      return { ...next, answer: { problem: refusal(cause).sentence, alternatives: null, value: null } };
    }
  }

  /**
   * @param {State} next
   * @param {object} reading
   */
  function readBeside({ visit, reading: typed }, reading) {
    const answer = (/** @type {Answer} */ given) => {
      if (state.visit === visit && state.reading === typed) show({ ...state, answer: given });
    };
    helper.read(visit, reading).then(
      (value) => answer({ problem: null, alternatives: null, value }),
      (problem) => problem !== null && answer({ problem: refusal(problem).sentence, alternatives: null, value: null }),
    );
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
     * Rows of eight numbers over places, from the fit that is shown; of a long table those drawn that are nearest.
     * @param {number} first
     * @param {number} last
     * @param {number} count
     */
    curve: (first, last, count) => appraisal?.curve(first, last, count) ?? nearestRows(state.drawn, first, last, count),
    /** Stops the helper and goes back to what was there before. */
    stop() {
      helper.stop();
      if (state.busy) dispatch({ type: 'undo' });
    },
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
 * What is typed as a question to the core, or why it is none.
 * @param {Core} core
 * @param {State} state
 * @returns {{ problem: string|null, alternatives: number[][]|null, reading: { indications: number[], influences: Record<string, number> }|null }}
 */
function question(core, { visit, report, reading }) {
  const { values, alternatives, sentence } = readInColumn(core, visit, 'indication', reading.text);
  const refused = (/** @type {string|null} */ problem) => ({ problem, alternatives, reading: null });
  if (!values) return refused(sentence);
  /** @type {Record<string, number>} */
  const influences = {};
  for (const name of influencesOf(visit)) {
    const text = reading.influences[name] ?? '';
    if (text.trim() === '') continue;
    const pieces = readPieces(core, text);
    if (pieces.values?.length !== 1) return refused(`${name}: ${pieces.sentence ?? 'write one number that reads in one way only.'}`);
    influences[name] = pieces.values[0];
  }
  if (!report?.fit) return refused('There is no curve yet to read a value from.');
  return { problem: null, alternatives: null, reading: { indications: values, influences } };
}

/**
 * @param {State['drawn']} drawn
 * @param {number} first
 * @param {number} last
 * @param {number} count
 */
function nearestRows(drawn, first, last, count) {
  if (!drawn || drawn.rows.length === 0) return new Float64Array();
  const most = drawn.rows.length / COLUMNS - 1;
  const rows = [];
  for (let at = 0; at < count; at += 1) {
    const place = count === 1 ? first : first + ((last - first) * at) / (count - 1);
    const nearest = Math.round((most * (place - drawn.first)) / (drawn.last - drawn.first));
    const start = COLUMNS * Math.max(0, Math.min(most, nearest));
    rows.push(...drawn.rows.subarray(start, start + COLUMNS));
  }
  return Float64Array.from(rows);
}

/** @param {Visit} visit */
function isLong(visit) {
  return pointsOf(visit).length > MANY_ROWS;
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
