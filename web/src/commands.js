// What the buttons do that reaches outside the sheet: files, paste, demos, leaves.

/** @import { Core, Intake, Notice, Opened, Visit } from './types.js' */
/** @import { Store } from './store.js' */
import headerTank from '../demo/header-tank.json';
import transmitter from '../demo/transmitter.json';
import { readInColumn, toCell } from './cells.js';
import { chooseFile, fileName, readFile, saveFile } from './files.js';
import { ownTexts } from './own.js';
import { refusal } from './store.js';
import { blankVisit, cellChange, influencesOf, pointsOf, withIntake, withPoint } from './visit.js';
import { isSound, outcomeWords, titleOf } from './words.js';

export const DEMOS = [
  {
    name: 'Header tank',
    hint: 'level gauge, slightly curved, one point that disagrees',
    visit: /** @type {Visit} */ (/** @type {unknown} */ (headerTank)),
  },
  {
    name: 'Pressure transmitter',
    hint: '0 to 10 bar, 4 to 20 mA, up and down',
    visit: /** @type {Visit} */ (/** @type {unknown} */ (transmitter)),
  },
];

const ACCEPTED = '.html,.htm,.json,.csv,.tsv,.txt,.dat';

/** Today where the computer stands, as ISO 8601. */
export function today() {
  const now = new Date();
  return [now.getFullYear(), now.getMonth() + 1, now.getDate()].map((part) => String(part).padStart(2, '0')).join('-');
}

/**
 * The leaf: this very file with the visit inside.
 * @param {Core} core
 * @param {Store} store
 */
export async function saveLeaf(core, store) {
  const { visit } = store.state();
  try {
    const bytes = core.press(ownTexts(), visit);
    const name = nameFor(visit, '.html');
    const done = await saveFile(bytes, name, 'text/html');
    if (done === 'cancelled') return;
    store.dispatch({
      type: 'pressed',
      notice: {
        level: 'note',
        sentence: `Leaf ${done === 'saved' ? 'saved' : `“${name}” handed to the browser's downloads`}. Digest of the visit, for the signed record: ${core.digest(visit)}`,
      },
    });
  } catch (problem) {
    say(store, refusal(problem));
  }
}

/**
 * @param {Core} core
 * @param {Store} store
 */
export async function saveVisit(core, store) {
  const { visit } = store.state();
  await saveFile(core.canonical(visit), nameFor(visit, '.visit.json'), 'application/json');
}

/**
 * @param {Core} core
 * @param {Store} store
 */
export async function saveReport(core, store) {
  const { visit } = store.state();
  await saveFile(core.report_json(visit), nameFor(visit, '.report.json'), 'application/json');
}

/**
 * The curve as it is drawn, for another program.
 * @param {Store} store
 */
export async function saveCurve(store) {
  const { visit, drawn, report } = store.state();
  if (!drawn || !report) return;
  const { argument, response } = report.units;
  const names = [
    'curve',
    'standard uncertainty of the curve',
    'curve from',
    'curve to',
    'new indication from',
    'new indication to',
    'nominal',
  ];
  const header = [`${report.units.variable} / ${argument}`, ...names.map((name) => `${name} / ${response}`)].map(quoted).join(',');
  const lines = [];
  for (let at = 0; at < drawn.rows.length; at += 8)
    lines.push(Array.from(drawn.rows.subarray(at, at + 8), (value) => (Number.isNaN(value) ? '' : String(value))).join(','));
  await saveFile(`${[header, ...lines].join('\r\n')}\r\n`, nameFor(visit, '.curve.csv'), 'text/csv');
}

/**
 * @param {Core} core
 * @param {Store} store
 */
export async function chooseAndOpen(core, store) {
  const file = await chooseFile(ACCEPTED);
  if (file) await openFile(core, store, file);
}

/**
 * A leaf, a visit or a table of points, told apart by what is in it.
 * @param {Core} core
 * @param {Store} store
 * @param {File} file
 */
export async function openFile(core, store, file) {
  const { bytes, sentence } = await readFile(file);
  if (!bytes) return say(store, { level: 'error', sentence });
  const start = new TextDecoder().decode(bytes.subarray(0, 64)).trimStart();
  try {
    if (start.startsWith('<')) openLeaf(core, store, bytes, file.name);
    else if (start.startsWith('{')) openVisit(core, store, new TextDecoder().decode(bytes), file.name);
    else takeIn(core, store, { text: null, bytes, source: file.name });
  } catch (problem) {
    say(store, refusal(problem));
  }
}

/**
 * Text or bytes with points; asks where something can be read in two ways, or where rows are there already.
 * @param {Core} core
 * @param {Store} store
 * @param {{ text: string|null, bytes: Uint8Array|null, source: string }} intake
 */
export function takeIn(core, store, intake) {
  try {
    const read = readIntake(core, intake, { influence_names: influencesOf(store.state().visit) });
    const asks = read.questions.length > 0 || (intake.bytes !== null && pointsOf(store.state().visit).length > 0 && read.points.length > 0);
    if (asks) store.dispatch({ type: 'panel', panel: { name: 'intake', intake } });
    else addIntake(store, read, false, intake.source);
  } catch (problem) {
    say(store, refusal(problem));
  }
}

/**
 * @param {Core} core
 * @param {{ text: string|null, bytes: Uint8Array|null }} intake
 * @param {object} options
 * @returns {Intake}
 */
export function readIntake(core, { text, bytes }, options) {
  return bytes ? core.intake_bytes(bytes, options) : core.intake_text(text ?? '', options);
}

/**
 * @param {Store} store
 * @param {Intake} intake
 * @param {boolean} replace
 * @param {string} source
 */
export function addIntake(store, intake, replace, source) {
  const more = intake.problems.map((problem) => problem.sentence);
  const count = intake.points.length;
  if (count === 0)
    return say(store, {
      level: 'error',
      sentence: `Nothing in ${source} could be read as a pair of reference value and indication; the sheet stays as it was.`,
      more,
    });
  const { visit, entering } = store.state();
  const what = `${count} ${count === 1 ? 'row' : 'rows'} from ${source}`;
  store.dispatch({ type: 'edit', visit: withIntake(visit, intake, replace, entering), what });
  const unread = intake.problems.filter((problem) => problem.level !== 'note').length;
  const left = unread > 0 ? ` ${unread === 1 ? 'One thing' : `${unread} things`} could not be read.` : '';
  say(store, {
    level: unread > 0 ? 'warning' : 'note',
    sentence: `${replace ? 'The sheet now holds' : 'Added'} ${what}.${left}${unitWords(visit, intake)}`,
    more,
  });
}

/**
 * A column of values pasted into a cell goes downward from it; a table goes through the intake.
 * @param {ClipboardEvent} event
 * @param {Core} core
 * @param {Store} store
 */
export function fillDown(event, core, store) {
  const cell = event.target;
  if (!(cell instanceof HTMLInputElement) || cell.dataset.row === undefined || cell.dataset.column === undefined) return;
  const lines = (event.clipboardData?.getData('text/plain') ?? '').split(/\r\n|\r|\n/).map((line) => line.trim());
  while (lines.at(-1) === '') lines.pop();
  if (lines.length < 2 || !lines.every((line) => line === '' || isNumber(core, line))) return;
  event.preventDefault();
  event.stopPropagation();
  const { visit, entering } = store.state();
  const column = cell.dataset.column;
  const first = Number(cell.dataset.row);
  let next = visit;
  lines.forEach((line, at) => {
    if (line === '') return;
    const index = Math.min(first + at, pointsOf(next).length);
    next = withPoint(
      next,
      index,
      cellChange(pointsOf(next)[index], column, line, toCell(readInColumn(core, next, column, line).values, column)),
      entering,
    );
  });
  store.dispatch({ type: 'edit', visit: next, what: `${lines.length} values pasted` });
}

/**
 * Paste outside the cells, or of a whole table.
 * @param {ClipboardEvent} event
 * @param {Core} core
 * @param {Store} store
 */
export function pasted(event, core, store) {
  const target = event.target;
  const inCell = target instanceof HTMLInputElement && target.dataset.row !== undefined;
  const inField = target instanceof HTMLInputElement || target instanceof HTMLTextAreaElement;
  if (inField && !inCell) return;
  const file = event.clipboardData?.files[0];
  const text = event.clipboardData?.getData('text/plain') ?? '';
  if (!file && (text.trim() === '' || (inCell && !/[\t\n\r;]/.test(text.trim())))) return;
  event.preventDefault();
  if (text.trim() !== '') takeIn(core, store, { text, bytes: null, source: 'the clipboard' });
  else if (file) openFile(core, store, file);
}

/**
 * @param {Core} core
 * @param {Store} store
 * @param {Visit} visit
 */
export function loadDemo(core, store, visit) {
  replaceBy(core, store, visit, `demo “${titleOf(visit)}” opened`, {
    level: 'note',
    sentence: 'A demo: all names and numbers in it are invented. Undo brings the sheet back that was here.',
  });
}

/**
 * @param {Store} store
 */
export function newSheet(store) {
  store.dispatch({
    type: 'replace',
    visit: blankVisit(today()),
    origin: 'blank',
    what: 'new sheet',
    notice: { level: 'note', sentence: 'A new sheet. Undo brings the one back that was here.' },
  });
}

/**
 * The points of a file that failed its checks, in a sheet that says so.
 * @param {Store} store
 * @param {Opened} opened
 */
export function recover(store, opened) {
  if (!opened.visit) return;
  const visit = { ...opened.visit, recovered: { outcome: opened.outcome, sentence: opened.sentence } };
  document.documentElement.dataset.state = 'ready';
  store.dispatch({ type: 'replace', visit, origin: 'recovered', what: 'points recovered', notice: null });
}

/**
 * @param {Core} core
 * @param {Store} store
 * @param {Visit} visit
 * @param {string} what
 * @param {Notice|null} notice
 */
export function replaceBy(core, store, visit, what, notice) {
  try {
    store.dispatch({ type: 'replace', visit, origin: core.digest(visit), what, notice });
  } catch (problem) {
    say(store, refusal(problem));
  }
}

/**
 * @param {Core} core
 * @param {Store} store
 * @param {Uint8Array} bytes
 * @param {string} name
 */
function openLeaf(core, store, bytes, name) {
  const opened = core.open_bytes(bytes);
  if (!isSound(opened))
    return say(store, { level: 'error', sentence: `“${name}” was not opened. ${opened.sentence}`, more: opened.changed, recover: opened });
  if (!opened.visit)
    return say(store, { level: 'error', sentence: `“${name}” is a page without a visit: there is nothing in it to open.` });
  replaceBy(core, store, opened.visit, `leaf “${name}” opened`, {
    level: 'note',
    sentence: `“${name}” opened; ${outcomeWords(opened.outcome)}.`,
  });
}

/**
 * @param {Core} core
 * @param {Store} store
 * @param {string} text
 * @param {string} name
 */
function openVisit(core, store, text, name) {
  let visit;
  try {
    visit = JSON.parse(text);
  } catch (cause) {
    return say(store, {
      level: 'error',
      sentence: `“${name}” is not whole: it cannot be read as JSON (${cause instanceof Error ? cause.message : cause}). Save it again where it came from.`,
    });
  }
  if (!Array.isArray(visit.points) || String(visit.schema ?? 'bandleaf.visit.').startsWith('bandleaf.visit.') === false) {
    return say(store, {
      level: 'error',
      sentence: `“${name}” is no visit: it has no list of points. Open a leaf, a visit, or a table of points.`,
    });
  }
  replaceBy(core, store, JSON.parse(core.canonical(visit)), `visit “${name}” opened`, {
    level: 'note',
    sentence: `Visit “${name}” opened.`,
  });
}

/**
 * @param {Store} store
 * @param {Notice} notice
 */
function say(store, notice) {
  store.dispatch({ type: 'notice', notice });
}

/**
 * @param {Visit} visit
 * @param {string} ending
 */
function nameFor(visit, ending) {
  return fileName(visit.instrument?.name ?? '', visit.occasion?.date ?? '', ending);
}

/**
 * @param {Core} core
 * @param {string} line
 */
function isNumber(core, line) {
  const cell = core.parse_cell(line);
  return cell.value !== null || cell.alternatives.length === 2;
}

/** @param {string} text */
function quoted(text) {
  return `"${text.replaceAll('"', '""')}"`;
}

/**
 * Units of the header that are not those of the sheet.
 * @param {Visit} visit
 * @param {Intake} intake
 */
function unitWords(visit, intake) {
  const { unit, output } = visit.instrument ?? {};
  const sheet = { reference: unit, indication: output?.unit || unit };
  for (const { role, unit: read } of intake.columns) {
    const own = role === 'reference' || role === 'indication' ? sheet[role] : undefined;
    if (own && read && own !== read) return ` The header says ${read} where the sheet has ${own}: nothing was converted.`;
  }
  return '';
}
