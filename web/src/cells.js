// Typed text to numbers, by the core's own rules for one cell; several repeats are written "151; 150; 151".

/** @import { Core, Cell, Point, Unread, Visit } from './types.js' */
import { cellChange, cellValue, columnsOf, pointsOf, typedText, valueText } from './visit.js';

const EVIDENCE = 500;

/**
 * @typedef {{ values: number[]|null, alternatives: number[][]|null, sentence: string|null }} Pieces
 * values where everything could be read; alternatives where the text can be read in two ways; a sentence where it cannot be read
 */

/**
 * @param {Core} core
 * @param {string} text
 * @returns {Pieces}
 */
export function readPieces(core, text) {
  const pieces = text
    .split(/[;\n\t]/)
    .map((piece) => piece.trim())
    .filter((piece) => piece !== '');
  if (pieces.length === 0) return { values: null, alternatives: null, sentence: null };
  const cells = pieces.map((piece) => core.parse_cell(piece));
  const bad = cells.find((cell) => cell.value === null && cell.alternatives.length < 2);
  if (bad) return { values: null, alternatives: null, sentence: bad.problem?.sentence ?? 'This is not a number.' };
  if (cells.some((cell) => cell.alternatives.length === 2))
    return { values: null, alternatives: [readings(cells, 0), readings(cells, 1)], sentence: null };
  return { values: readings(cells, 0), alternatives: null, sentence: null };
}

/**
 * The same for a cell of a column: what reads in two ways is read as the other rows of the column were, where they
 * agree about what the mark means.
 * @param {Core} core
 * @param {Visit} visit
 * @param {string} column
 * @param {string} text
 * @returns {Pieces}
 */
export function readInColumn(core, visit, column, text) {
  const pieces = readPieces(core, text);
  const mark = onlyMark(text);
  if (!pieces.alternatives || !mark) return pieces;
  const uses = new Set();
  for (const point of pointsOf(visit).slice(-EVIDENCE)) {
    const typed = typedText(point, column);
    if (typed !== null && onlyMark(typed) === mark) uses.add(useOfMark(core, typed, cellValue(point, column)));
  }
  uses.delete(null);
  if (uses.size !== 1) return pieces;
  return { values: pieces.alternatives[uses.has('decimal') ? 0 : 1], alternatives: null, sentence: null };
}

/**
 * The value of a cell: one number, a list of repeats, or null.
 * @param {number[]|null} values
 * @param {string} column
 * @returns {number|number[]|null}
 */
export function toCell(values, column) {
  if (!values || values.length === 0) return null;
  if (values.length === 1) return values[0];
  return column === 'indication' ? values : null;
}

/**
 * What a person said of one cell that reads in two ways, for every cell of the column that waits for the same answer.
 * @param {Core} core
 * @param {Visit} visit
 * @param {string} column
 * @param {string} text
 * @param {number} choice 0: its mark is the decimal mark, 1: it groups thousands
 * @returns {Visit}
 */
export function decided(core, visit, column, text, choice) {
  const mark = onlyMark(text);
  const points = pointsOf(visit).map((point) => {
    const typed = typedText(point, column);
    if (typed === null || cellValue(point, column) !== null || onlyMark(typed) !== mark) return point;
    const { alternatives } = readPieces(core, typed);
    return alternatives ? { ...point, ...cellChange(point, column, typed, toCell(alternatives[choice], column)) } : point;
  });
  return { ...visit, points };
}

/**
 * What a cell shows: the text as it was typed, but only where it still reads as the value that is computed with, since a
 * file could carry another one.
 * @param {Core} core
 * @param {Point|undefined} point
 * @param {string} column
 */
export function shownText(core, point, column) {
  if (!point) return '';
  const value = cellValue(point, column);
  const text = typedText(point, column);
  if (text === null) return valueText(value);
  if (value === null) return text;
  // A decimal point is how numbers are written here, so such a text stands also where it could be read in another way.
  const asWritten = text
    .split(';')
    .map((piece) => String(Number(piece.trim())))
    .join('; ');
  const same = asWritten === valueText(value) || valueText(toCell(readPieces(core, text).values, column)) === valueText(value);
  return same ? text : valueText(value);
}

/**
 * What cannot be used in a row as it was typed.
 * @param {Core} core
 * @param {ReturnType<typeof columnsOf>} columns
 * @param {Point} point
 * @returns {{ column: string, label: string, text: string, sentence: string|null, alternatives: number[][]|null }|null}
 */
export function rowTrouble(core, columns, point) {
  for (const { id, label } of columns) {
    const text = typedText(point, id) ?? '';
    if (text.trim() === '' || cellValue(point, id) !== null) continue;
    const { values, alternatives, sentence } = readPieces(core, text);
    if (alternatives) return { column: id, label, text, sentence: null, alternatives };
    const several = values && values.length > 1 ? `Only the indication can have several values; ${label} needs one number.` : null;
    return { column: id, label, text, sentence: sentence ?? several, alternatives: null };
  }
  return null;
}

/**
 * The first row with a cell that cannot be used as it was typed, said with what to do.
 * @param {Core} core
 * @param {Visit} visit
 * @returns {Unread|null}
 */
export function firstUnread(core, visit) {
  const columns = columnsOf(visit);
  const points = pointsOf(visit);
  for (let index = 0; index < points.length; index += 1) {
    const trouble = rowTrouble(core, columns, points[index]);
    if (!trouble) continue;
    const sentence = trouble.alternatives ? `“${trouble.text}” can be read in two ways: choose one in the row.` : (trouble.sentence ?? '');
    return { row: index + 1, label: trouble.label, sentence };
  }
  return null;
}

/**
 * The comma or point in a text, where it has but one kind of them.
 * @param {string} text
 */
function onlyMark(text) {
  const marks = new Set(text.match(/[.,]/g));
  return marks.size === 1 ? [...marks][0] : null;
}

/**
 * What the mark in a typed cell was taken for, from the value that was kept.
 * @param {Core} core
 * @param {string} typed
 * @param {number|number[]|null} value
 * @returns {'decimal'|'grouping'|null}
 */
function useOfMark(core, typed, value) {
  if (value === null) return null;
  const { values, alternatives } = readPieces(core, typed);
  const kept = valueText(value);
  if (alternatives)
    return valueText(toCell(alternatives[0], 'indication')) === kept
      ? 'decimal'
      : valueText(toCell(alternatives[1], 'indication')) === kept
        ? 'grouping'
        : null;
  const plain = typed.split(';').map((piece) => Number(piece.trim().replace(',', '.')));
  return values && plain.join() === values.join() ? 'decimal' : 'grouping';
}

/**
 * @param {Cell[]} cells
 * @param {number} choice
 */
function readings(cells, choice) {
  return cells.map((cell) => (cell.alternatives.length === 2 ? cell.alternatives[choice] : /** @type {number} */ (cell.value)));
}
