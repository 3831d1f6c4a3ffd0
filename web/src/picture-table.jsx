// Everything that is visible in the picture, as figures.

/** @import { Parts } from './store.js' */
import { ticks } from 'd3-array';
import { useMemo } from 'preact/hooks';
import { asError } from './picture-scene.js';
import { pointsOf } from './visit.js';

const PLACES = 21;
const COLUMNS = 8;
const ROWS_SHOWN = 500;

/** @param {Parts} props */
export function PictureTable({ core, store, state }) {
  const { visit, report, drawn, answer } = state;
  return useMemo(
    () => (
      <div class="picture-table" tabIndex={0} role="region" aria-label="The picture as figures">
        {answer.value?.value && (
          <p>
            Reading {answer.value.indications.map(String).join('; ')} {report?.units.output}: {answer.value.value.display},{' '}
            {answer.value.value.display_interval}.
          </p>
        )}
        <CurveFigures {...{ core, store, report, drawn }} />
        <PointFigures core={core} report={report} visit={visit} />
      </div>
    ),
    [visit, report, answer],
  );
}

/** @param {{ core: Parts['core'], store: Parts['store'], report: Parts['state']['report'], drawn: Parts['state']['drawn'] }} props */
function CurveFigures({ core, store, report, drawn }) {
  if (!report?.fit || !drawn) return <p>No curve yet.</p>;
  const places = ticks(drawn.first, drawn.last, PLACES);
  const rows = chunks(store.curve(places[0], places[places.length - 1], places.length));
  const { argument, response, variable } = report.units;
  const hasError = rows.some((row) => !Number.isNaN(row[7]));
  const step = (drawn.last - drawn.first) / 500;
  const { orientation, spanned } = report.fit;
  const [from, to] = spanned;
  return (
    <table class="figures">
      <caption>
        The curve{argument && `, ${variable} in ${argument}`}
        {response && `, the others in ${response}`}
      </caption>
      <thead>
        <tr>
          <th scope="col">{variable}</th>
          {hasError && <th scope="col">error of the curve</th>}
          <th scope="col">curve</th>
          <th scope="col">band of the curve</th>
          <th scope="col">new indication</th>
          <th scope="col">
            <span class="unseen">remark</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {rows.map(([x, estimate, , lo, hi, newLo, newHi, nominal]) => (
          <tr key={x}>
            <th scope="row">{core.format_to(x, step)}</th>
            {hasError && <td>{core.format_value(asError(orientation, estimate, nominal), (hi - lo) / 2, '')}</td>}
            <td>{core.format_value(estimate, (hi - lo) / 2, '')}</td>
            <td>{core.format_interval(lo, hi, '')}</td>
            <td>{core.format_interval(newLo, newHi, '')}</td>
            <td>{x < from || x > to ? 'extrapolated' : ''}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}

/** @param {{ core: Parts['core'], report: Parts['state']['report'], visit: Parts['state']['visit'] }} props */
function PointFigures({ core, report, visit }) {
  const rows = report?.points ?? [];
  const points = pointsOf(visit);
  const figure = (/** @type {number|null} */ value, /** @type {number|null} */ like) => {
    if (value === null) return '';
    return like === null || like <= 0 ? core.format_number(value, 3) : core.format_to(value, like);
  };
  return (
    <table class="figures">
      <caption>The points, in the units of the table of points</caption>
      <thead>
        <tr>
          <th scope="col">row</th>
          <th scope="col">reference</th>
          <th scope="col">indication</th>
          <th scope="col">error</th>
          <th scope="col">error, % of span</th>
          <th scope="col">± U</th>
          <th scope="col">minus curve</th>
          <th scope="col">leverage</th>
          <th scope="col">left-out tail</th>
          <th scope="col">
            <span class="unseen">remark</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {rows.slice(0, ROWS_SHOWN).map((row) => (
          <tr key={`${row.point}.${row.repeat}`} class={row.used ? undefined : 'aside'}>
            <th scope="row">{row.point + 1}</th>
            <td>{String(row.reference)}</td>
            <td>{String(row.indication)}</td>
            <td>{row.error_display}</td>
            <td>{figure(row.error_percent_of_span, null)}</td>
            <td>{figure(row.expanded_uncertainty, row.expanded_uncertainty)}</td>
            <td>{figure(row.residual, row.expanded_uncertainty)}</td>
            <td>{figure(row.leverage, 0.01)}</td>
            <td>{figure(row.left_out_tail, 0.001)}</td>
            <td>{points[row.point]?.set_aside ? `set aside: ${points[row.point].set_aside}` : row.used ? '' : 'not in this fit'}</td>
          </tr>
        ))}
      </tbody>
      {rows.length > ROWS_SHOWN && (
        <caption>
          The first {ROWS_SHOWN} of {rows.length} indications are shown; the report has all.
        </caption>
      )}
    </table>
  );
}

/**
 * @param {Float64Array} rows
 * @returns {number[][]}
 */
function chunks(rows) {
  return Array.from({ length: Math.floor(rows.length / COLUMNS) }, (_, at) => Array.from(rows.subarray(at * COLUMNS, (at + 1) * COLUMNS)));
}
