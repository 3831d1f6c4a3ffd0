// The table of points: typed into, pasted into, dropped onto. Every row says what is wrong with it.

/** @import { Parts } from './store.js' */
/** @import { Point, PointReport, Problem } from './types.js' */
import { useMemo, useRef, useState } from 'preact/hooks';
import { decided, readInColumn, rowTrouble, shownText, toCell } from './cells.js';
import { chooseAndOpen, fillDown } from './commands.js';
import { TwoWays } from './fields.jsx';
import { cellChange, columnsOf, pointsOf, withPoint } from './visit.js';
import { isReserved, stateWords } from './words.js';

const ROWS_SHOWN = 200;
const IDLE = 800;

/** @param {Parts} props */
export function Points({ core, store, state, dispatch }) {
  const { visit, report, firstRow, entering } = state;
  const points = pointsOf(visit);
  const columns = columnsOf(visit);
  const byPoint = useMemo(() => grouped(report?.points ?? [], report?.messages ?? []), [report]);
  const hasError = (report?.points ?? []).some((row) => row.error !== null);
  const bothStates = new Set(points.map((point) => point.state ?? 'as_found')).size === 2;
  const first = Math.min(firstRow, Math.max(0, points.length - 1));
  const last = Math.min(first + ROWS_SHOWN, points.length);
  const rows = Array.from({ length: last - first + (last === points.length ? 1 : 0) }, (_, at) => first + at);
  const unit = report?.units.output ?? '';
  return (
    <section class="points" aria-labelledby="points-title">
      <div class="part-head">
        <h2 id="points-title">Points</h2>
        <span class="head-tools">
          <label class="inline">
            New rows{' '}
            <select value={entering} onChange={(event) => dispatch({ type: 'show', change: { entering: event.currentTarget.value } })}>
              <option value="as_found">as found</option>
              <option value="as_left">as left</option>
            </select>
          </label>
          <button type="button" class="change" onClick={() => chooseAndOpen(core, store)}>
            from file
          </button>
        </span>
      </div>
      <div class="table-frame" tabIndex={-1}>
        <table
          class="grid"
          onKeyDown={(event) =>
            navigate(
              event,
              columns.map((column) => column.id),
            )
          }
          onPaste={(event) => fillDown(event, core, store)}
        >
          <thead>
            <tr>
              <th scope="col">
                <span class="unseen">row</span>
              </th>
              {columns.map((column) => (
                <th key={column.id} scope="col" class="number">
                  {column.label}
                  <small>{column.unit}</small>
                </th>
              ))}
              {hasError && (
                <th scope="col" class="number">
                  error<small>{unit}</small>
                </th>
              )}
              <th scope="col">
                <span class="unseen">approach</span>
              </th>
              {bothStates && <th scope="col">state</th>}
              <th scope="col">
                <span class="unseen">more</span>
              </th>
            </tr>
          </thead>
          <tbody>
            {rows.map((index) => (
              <Row
                key={index}
                {...{ core, store, state, dispatch, index, columns, hasError, bothStates }}
                point={points[index]}
                known={byPoint.get(index)}
              />
            ))}
          </tbody>
        </table>
      </div>
      {points.length > ROWS_SHOWN && (
        <Pager first={first} last={last} count={points.length} onGo={(row) => dispatch({ type: 'show', change: { firstRow: row } })} />
      )}
    </section>
  );
}

/**
 * @param {Parts & {
 *   index: number, point: Point|undefined, columns: ReturnType<typeof columnsOf>, known: Known|undefined, hasError: boolean, bothStates: boolean
 * }} props
 */
function Row({ core, store, dispatch, index, point, columns, known, hasError, bothStates }) {
  return useMemo(() => {
    const trouble = point ? rowTrouble(core, columns, point) : null;
    const messages = trouble ? [] : (known?.messages ?? []);
    const aside = point?.set_aside ?? null;
    const marked = trouble !== null || messages.length > 0;
    const width = columns.length + 3 + Number(hasError) + Number(bothStates);
    const classes = [!point && 'blank', aside !== null && 'aside', marked && 'marked'].filter(Boolean).join(' ');
    return (
      <>
        <tr class={classes || undefined}>
          <th scope="row">{index + 1}</th>
          {columns.map((column) => (
            <td key={column.id}>
              <CellField {...{ core, store, index, column, point }} bad={trouble?.column === column.id} />
            </td>
          ))}
          {hasError && (
            <td class="number error">
              {(known?.rows ?? [])
                .map((row) => row.error_display)
                .filter(Boolean)
                .join('; ')}
            </td>
          )}
          <td class="narrow">{point && <ApproachButton {...{ store, index, point }} />}</td>
          {bothStates && <td>{point && stateWords(point.state)}</td>}
          <td class="narrow">
            {point && (
              <button
                type="button"
                class="icon quiet"
                aria-label={`Row ${index + 1}: set aside, state and details`}
                onClick={() => dispatch({ type: 'panel', panel: { name: 'point', point: index } })}
              >
                ⋯
              </button>
            )}
          </td>
        </tr>
        {(marked || aside !== null) && (
          <tr class={`row-note ${classes}`}>
            <td />
            <td colSpan={width - 1} id={`row-note-${index}`}>
              {aside !== null && <span>Set aside: {aside}. </span>}
              {trouble?.alternatives && (
                <TwoWays
                  text={trouble.text}
                  alternatives={trouble.alternatives}
                  onChoose={(_, choice) => decide(core, store, trouble.column, trouble.text, choice)}
                />
              )}
              {trouble?.sentence && <span>{trouble.sentence} </span>}
              {messages.map((message) => (
                <span key={message.code + message.sentence}>{message.sentence} </span>
              ))}
            </td>
          </tr>
        )}
      </>
    );
  }, [point, known, hasError, bothStates, columns.map((column) => column.id).join('|'), index]);
}

/** @param {{ core: Parts['core'], store: Parts['store'], index: number, column: { id: string, label: string }, point: Point|undefined, bad: boolean }} props */
function CellField({ core, store, index, column, point, bad }) {
  const [draft, setDraft] = useState(/** @type {string|null} */ (null));
  const idle = useRef(0);
  const shown = draft ?? shownText(core, point, column.id);
  const leave = () => {
    clearTimeout(idle.current);
    if (draft !== null) commitText(core, store, index, column.id, draft);
    setDraft(null);
  };
  return (
    <input
      class="cell"
      inputmode="decimal"
      autocomplete="off"
      value={shown}
      data-row={index}
      data-column={column.id}
      aria-label={`${column.label}, row ${index + 1}`}
      aria-invalid={bad ? 'true' : undefined}
      aria-describedby={bad ? `row-note-${index}` : undefined}
      onInput={(event) => {
        const text = event.currentTarget.value;
        setDraft(text);
        clearTimeout(idle.current);
        idle.current = window.setTimeout(() => commitText(core, store, index, column.id, text), IDLE);
      }}
      onKeyDown={(event) => {
        if (event.key !== 'Escape') return;
        clearTimeout(idle.current);
        setDraft(null);
      }}
      onFocus={(event) => event.currentTarget.select()}
      onBlur={leave}
    />
  );
}

/** @param {{ store: Parts['store'], index: number, point: Point }} props */
function ApproachButton({ store, index, point }) {
  const order = /** @type {const} */ ([null, 'up', 'down']);
  const approach = point.approach ?? null;
  const next = order[(order.indexOf(approach) + 1) % order.length];
  const words = { up: 'approached rising', down: 'approached falling' };
  const change = () => {
    const { visit, entering } = store.state();
    store.dispatch({
      type: 'edit',
      visit: withPoint(visit, index, { approach: next }, entering),
      what: `approach of row ${index + 1}`,
      merge: `approach:${index}`,
    });
  };
  return (
    <button
      type="button"
      class="icon quiet"
      aria-label={`Row ${index + 1}: ${approach ? words[approach] : 'approach not recorded'}; change`}
      onClick={change}
    >
      {approach === 'up' ? '↑' : approach === 'down' ? '↓' : '–'}
    </button>
  );
}

/** @param {{ first: number, last: number, count: number, onGo: (row: number) => void }} props */
function Pager({ first, last, count, onGo }) {
  return (
    <p class="pager">
      <button type="button" class="small" disabled={first === 0} onClick={() => onGo(Math.max(0, first - ROWS_SHOWN))}>
        Earlier
      </button>
      rows {first + 1} to {last} of {count}
      <button type="button" class="small" disabled={last >= count} onClick={() => onGo(last)}>
        Later
      </button>
    </p>
  );
}

/** @typedef {{ rows: PointReport[], messages: Problem[] }} Known what the report says of one point */

/**
 * @param {PointReport[]} rows
 * @param {Problem[]} messages
 * @returns {Map<number, Known>}
 */
function grouped(rows, messages) {
  /** @type {Map<number, Known>} */
  const known = new Map();
  const at = (/** @type {number} */ point) => {
    const entry = known.get(point) ?? { rows: [], messages: [] };
    known.set(point, entry);
    return entry;
  };
  for (const row of rows) at(row.point).rows.push(row);
  for (const message of messages) {
    const match = /^points\[(\d+)\]/.exec(message.place);
    if (match && !isReserved(message)) at(Number(match[1])).messages.push(message);
  }
  return known;
}

/**
 * @param {Parts['core']} core
 * @param {Parts['store']} store
 * @param {number} index
 * @param {string} column
 * @param {string} text
 */
function commitText(core, store, index, column, text) {
  const { visit } = store.state();
  const point = pointsOf(visit)[index];
  if (text.trim() === '' && !point) return;
  if (text === shownText(core, point, column)) return;
  commit(store, index, column, text, readInColumn(core, visit, column, text).values);
}

/**
 * @param {Parts['store']} store
 * @param {number} index
 * @param {string} column
 * @param {string} text
 * @param {number[]|null} values
 */
function commit(store, index, column, text, values) {
  const { visit, entering } = store.state();
  const point = pointsOf(visit)[index];
  const change = cellChange(point, column, text.trim(), toCell(values, column));
  store.dispatch({
    type: 'edit',
    visit: withPoint(visit, index, change, entering),
    what: `row ${index + 1}, ${column.replace('influence:', '')}`,
    merge: `cell:${index}:${column}`,
  });
}

/**
 * @param {Parts['core']} core
 * @param {Parts['store']} store
 * @param {string} column
 * @param {string} text
 * @param {number} choice
 */
function decide(core, store, column, text, choice) {
  store.dispatch({ type: 'edit', visit: decided(core, store.state().visit, column, text, choice), what: `“${text}” and its like read` });
}

/**
 * Arrow keys move between cells, sideways only from the ends of the text, and from the last to the buttons of the row;
 * Enter goes to the next cell to be filled, Tab from the last cell to the next row.
 * @param {KeyboardEvent} event
 * @param {string[]} columns
 */
function navigate(event, columns) {
  const cell = event.target;
  if (!(cell instanceof HTMLInputElement) || cell.dataset.row === undefined || event.ctrlKey || event.metaKey || event.altKey) return;
  const row = Number(cell.dataset.row);
  const column = columns.indexOf(cell.dataset.column ?? '');
  const atStart = cell.selectionStart === 0 && (cell.selectionEnd === 0 || cell.selectionEnd === cell.value.length);
  const atEnd = cell.selectionEnd === cell.value.length && (cell.selectionStart === 0 || cell.selectionStart === cell.value.length);
  const isLast = column === columns.length - 1;
  const isBlank = cell.closest('tr')?.classList.contains('blank') ?? false;
  const moves = /** @type {Record<string, [number, number]|null>} */ ({
    ArrowUp: [row - 1, column],
    ArrowDown: [row + 1, column],
    ArrowLeft: atStart && column > 0 ? [row, column - 1] : null,
    ArrowRight: atEnd && !isLast ? [row, column + 1] : null,
    Enter: event.shiftKey ? [row - 1, column] : afterEnter(cell, row, column, columns),
    Tab: isLast && !event.shiftKey && !(isBlank && cell.value === '') ? [row + 1, 0] : null,
  });
  if (event.key === 'ArrowRight' && atEnd && isLast) cell.closest('tr')?.querySelector('button')?.focus();
  const to = moves[event.key];
  if (!to) return;
  event.preventDefault();
  const table = cell.closest('table');
  cell.blur();
  cellAt(table, to[0], columns[to[1]])?.focus();
}

/**
 * @param {HTMLInputElement} cell
 * @param {number} row
 * @param {number} column
 * @param {string[]} columns
 * @returns {[number, number]}
 */
function afterEnter(cell, row, column, columns) {
  const table = cell.closest('table');
  for (let next = column + 1; next < columns.length; next += 1) {
    if (cellAt(table, row, columns[next])?.value === '') return [row, next];
  }
  const below = cellAt(table, row + 1, 'reference');
  return [row + 1, below && below.value !== '' ? column : 0];
}

/**
 * @param {Element|null} table
 * @param {number} row
 * @param {string} column
 * @returns {HTMLInputElement|null}
 */
function cellAt(table, row, column) {
  return table?.querySelector(`input[data-row="${row}"][data-column="${CSS.escape(column)}"]`) ?? null;
}
