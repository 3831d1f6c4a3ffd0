// Over which range the picture is drawn, and what stands on its axes.

/** @import { Orientation, Report, Visit } from './types.js' */
import { extent } from 'd3-array';

const MARGIN = 0.03;

/**
 * First and last argument of the drawn curve: the range of use and every point, with a little room.
 * @param {Visit} visit
 * @param {Report} report
 * @returns {[number, number]}
 */
export function drawnRange(visit, report) {
  const places = report.points.map((point) => argumentOf(orientationOf(visit), point));
  const [first, last] = extent([...places, ...argumentRange(visit)]);
  if (first === undefined || last === undefined) return [0, 1];
  const room = (last - first) * MARGIN || Math.abs(first) * MARGIN || 1;
  return [first - room, last + room];
}

/** @param {Visit} visit @returns {Orientation} */
export function orientationOf(visit) {
  return visit.model?.orientation ?? 'indication_from_reference';
}

/**
 * The argument of the fit at a point.
 * @param {Orientation} orientation
 * @param {{ reference: number, indication: number }} point
 */
export function argumentOf(orientation, { reference, indication }) {
  return orientation === 'indication_from_reference' ? reference : indication;
}

/**
 * What the fit describes at a point.
 * @param {Orientation} orientation
 * @param {{ reference: number, indication: number }} point
 */
export function responseOf(orientation, { reference, indication }) {
  if (orientation === 'indication_from_reference') return indication;
  return orientation === 'reference_from_indication' ? reference : reference - indication;
}

/**
 * Names of both axes in words.
 * @param {Visit} visit
 * @returns {{ argument: string, response: string }}
 */
export function axisNames(visit) {
  const orientation = orientationOf(visit);
  if (orientation === 'indication_from_reference') return { argument: 'reference value', response: 'indication' };
  return { argument: 'indication', response: orientation === 'reference_from_indication' ? 'reference value' : 'correction' };
}

/** @param {Visit} visit @returns {number[]} */
function argumentRange(visit) {
  const { range, output } = visit.instrument ?? {};
  if (orientationOf(visit) === 'indication_from_reference') return range ?? [];
  const nominal = output?.nominal;
  if (!nominal) return [];
  return nominal.kind === 'identity' ? (range ?? []) : nominal.range;
}
