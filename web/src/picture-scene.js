// What the picture shows, in the units of its axes: the report's numbers, put over one another as the view asks.
//
// Nothing is computed here but differences of the report's own columns: curve minus nominal (error), curve minus curve
// (residuals).

/** @import { Curve, Orientation, Point, PointReport, State, View } from './types.js' */
import { extent, max } from 'd3-array';
import { argumentOf, axisNames, orientationOf, responseOf } from './picture-range.js';
import { pointsOf } from './visit.js';
import { outputUnit } from './words.js';

const COLUMNS = 8;

/** @typedef {{ x: number, y: number, lo: number, hi: number, newLo: number, newHi: number }} CurvePlace */
/** @typedef {{ x: number, y: number, bar: number|null, aside: boolean, glyph: 'circle'|'up'|'down'|'square', point: number }} Mark */
/** @typedef {{ x: number, y: number, label: string, acrossX: boolean, indication: number|null, density: { at: number[], density: number[] }|null }} Plumb */

/**
 * @typedef {{
 *   view: View, x: [number, number], y: [number, number], signed: boolean, xLabel: string, yLabel: string,
 *   curve: CurvePlace[], spanned: [number, number]|null, earlier: { x: number, y: number }[], marks: Mark[], plumb: Plumb|null
 * }} Scene
 */

/**
 * The views that make sense for a report: no error view without a nominal characteristic.
 * @param {State} state
 * @returns {View[]}
 */
export function viewsOf({ drawn, report }) {
  const hasError = drawn && drawn.rows.length > 0 ? !Number.isNaN(drawn.rows[7]) : (report?.points ?? []).some((row) => row.error !== null);
  return hasError ? ['error', 'value', 'residuals', 'table'] : ['value', 'residuals', 'table'];
}

/**
 * The view that was chosen; otherwise errors, unless they are as large as the indications themselves, as where units are
 * not stated yet.
 * @param {State} state
 * @returns {View}
 */
export function viewOf(state) {
  const views = viewsOf(state);
  if (state.view && views.includes(state.view)) return state.view;
  return views[0] === 'error' && !errorsAreSmall(state.report) ? 'value' : views[0];
}

/** @param {State['report']} report */
function errorsAreSmall(report) {
  const rows = rowsOf(report).filter((row) => row.used && row.error !== null);
  const [low, high] = extent(rows, (row) => row.indication);
  const largest = max(rows, (row) => Math.abs(row.error ?? 0)) ?? 0;
  return low === undefined || largest <= 0.3 * (high - low) || low === high;
}

/**
 * @param {State} state
 * @returns {Scene}
 */
export function sceneOf(state) {
  const { visit, report, drawn, asFoundCurve } = state;
  const view = viewOf(state);
  const names = axisNames(visit);
  const orientation = orientationOf(visit);
  const curve = drawn ? curvePlaces(drawn.rows, view, orientation) : [];
  const spanned = report?.fit?.spanned ?? null;
  const marks = rowsOf(report).flatMap((row) => markOf(state, row, view) ?? []);
  const [xUnit, yUnit] =
    orientation === 'indication_from_reference'
      ? [visit.instrument?.unit ?? '', outputUnit(visit)]
      : [outputUnit(visit), visit.instrument?.unit ?? ''];
  return {
    view,
    curve,
    spanned,
    marks,
    x: [drawn?.first ?? 0, drawn?.last ?? 1],
    y: heightOf(curve, marks, spanned),
    signed: view !== 'value' || names.response === 'correction',
    xLabel: withUnit(names.argument, xUnit),
    yLabel: withUnit(
      { error: 'error of indication', residuals: `${names.response} minus curve` }[/** @type {'error'} */ (view)] ?? names.response,
      yUnit,
    ),
    earlier: asFoundCurve && view !== 'residuals' ? earlierPlaces(asFoundCurve, view, orientation) : [],
    plumb: null,
  };
}

/**
 * The curve at a place, straight between the drawn places.
 * @param {CurvePlace[]} curve
 * @param {number} x
 */
export function heightAt(curve, x) {
  const next = curve.findIndex((place) => place.x >= x);
  if (next <= 0) return next === 0 ? curve[0].y : (curve.at(-1)?.y ?? 0);
  const [left, right] = [curve[next - 1], curve[next]];
  return left.y + ((right.y - left.y) * (x - left.x)) / (right.x - left.x);
}

/**
 * The curve at a place as an error of indication: indication minus nominal, whichever of the two the curve gives.
 * @param {Orientation} orientation
 * @param {number} estimate
 * @param {number} nominal
 */
export function asError(orientation, estimate, nominal) {
  return orientation === 'indication_from_reference' ? estimate - nominal : nominal - estimate;
}

/**
 * @param {Float64Array} rows
 * @param {View} view
 * @param {Orientation} orientation
 * @returns {CurvePlace[]}
 */
function curvePlaces(rows, view, orientation) {
  const places = [];
  for (let at = 0; at + COLUMNS <= rows.length; at += COLUMNS) {
    const [x, estimate, , lo, hi, newLo, newHi, nominal] = rows.subarray(at, at + COLUMNS);
    const seen = (/** @type {number} */ value) =>
      view === 'error' ? asError(orientation, value, nominal) : view === 'residuals' ? value - estimate : value;
    places.push({ x, y: seen(estimate), lo: seen(lo), hi: seen(hi), newLo: seen(newLo), newHi: seen(newHi) });
  }
  return places.filter((place) => Number.isFinite(place.y));
}

/**
 * @param {Curve} curve
 * @param {View} view
 * @param {Orientation} orientation
 */
function earlierPlaces(curve, view, orientation) {
  const { x, estimate, nominal } = curve;
  return x.map((place, at) => ({
    x: place,
    y: view === 'error' && nominal ? asError(orientation, estimate[at], nominal[at]) : estimate[at],
  }));
}

/**
 * Each indication as the fit of its own state sees it.
 * @param {State['report']} report
 * @returns {PointReport[]}
 */
function rowsOf(report) {
  const earlier = report?.as_found?.points ?? [];
  return (report?.points ?? []).map((row, at) => (!row.used && earlier[at]?.used ? earlier[at] : row));
}

/**
 * @param {State} state
 * @param {PointReport} row
 * @param {View} view
 * @returns {Mark|null}
 */
function markOf(state, row, view) {
  const { visit, report } = state;
  const orientation = orientationOf(visit);
  const point = pointsOf(visit)[row.point];
  const y = view === 'error' ? row.error : view === 'residuals' ? row.residual : responseOf(orientation, row);
  if (y === null || y === undefined || !point) return null;
  return {
    x: argumentOf(orientation, row),
    y,
    bar: row.expanded_uncertainty,
    aside: (point.set_aside ?? null) !== null,
    glyph: glyphOf(point, report?.state),
    point: row.point,
  };
}

/**
 * @param {Point} point
 * @param {string|undefined} shown
 * @returns {Mark['glyph']}
 */
function glyphOf(point, shown) {
  if (shown !== undefined && (point.state ?? 'as_found') !== shown) return 'square';
  return point.approach ?? 'circle';
}

/**
 * The reading on the axis of the values: below where the curve is read backwards, at the left where it is read forwards.
 * @param {State} state
 * @param {Scene} scene
 * @returns {Plumb|null}
 */
export function plumbOf({ visit, answer }, { curve, view }) {
  const reading = answer.value;
  const value = reading?.value;
  if (!value || curve.length === 0) return null;
  const { density, median } = value;
  if (orientationOf(visit) === 'indication_from_reference') {
    const y = heightAt(curve, median);
    return {
      x: median,
      y,
      label: value.display,
      acrossX: true,
      indication: view === 'value' ? reading.mean_indication : null,
      density: { at: density.x, density: density.density },
    };
  }
  const x = reading.mean_indication;
  const shift = orientationOf(visit) === 'correction_from_indication' ? x : 0;
  const along = view === 'value' ? { at: density.x.map((place) => place - shift), density: density.density } : null;
  return { x, y: heightAt(curve, x), label: value.display, acrossX: false, indication: null, density: along };
}

/**
 * The height of the picture: points with their bars and both bands where there are points; where the curve is
 * extrapolated the bands may take half as much again and are then cut.
 * @param {CurvePlace[]} curve
 * @param {Mark[]} marks
 * @param {[number, number]|null} spanned
 * @returns {[number, number]}
 */
function heightOf(curve, marks, spanned) {
  const inside = spanned ? curve.filter(({ x }) => x >= spanned[0] && x <= spanned[1]) : [];
  const [low, high] = extent(
    [...marks.flatMap(({ y, bar }) => [y - (bar ?? 0), y + (bar ?? 0)]), ...inside.flatMap(({ newLo, newHi }) => [newLo, newHi])].filter(
      Number.isFinite,
    ),
  );
  if (low === undefined || high === undefined) return [-1, 1];
  const [allLow = low, allHigh = high] = extent(curve.flatMap(({ newLo, newHi }) => [newLo, newHi]).filter(Number.isFinite));
  const height = high - low || Math.abs(high) || 1;
  const room = height * 0.06;
  return [Math.max(Math.min(low, allLow), low - height / 2) - room, Math.min(Math.max(high, allHigh), high + height / 2) + room];
}

/**
 * @param {string} name
 * @param {string} unit
 */
function withUnit(name, unit) {
  return unit ? `${name} / ${unit}` : name;
}
