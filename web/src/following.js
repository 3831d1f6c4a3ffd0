// What follows from a visit by asking the core: the report without its curve, the curve as it is drawn, and the first
// cell that could not be read. The same for the page and for its helper.

/** @import { Appraisal, Core, Followed, Visit } from './types.js' */
import { firstUnread } from './cells.js';
import { drawnRange } from './picture-range.js';

const PLACES = 241;

/**
 * Throws where the core cannot read the visit.
 * @param {Core} core
 * @param {Visit} visit
 * @returns {{ appraisal: Appraisal, followed: Followed }}
 */
export function follow(core, visit) {
  const appraisal = core.appraise(visit);
  const report = appraisal.outline();
  const [first, last] = drawnRange(visit, report);
  const rows = report.fit ? appraisal.curve(first, last, PLACES) : new Float64Array();
  const asFoundCurve = report.as_found ? (appraisal.report().as_found?.curve ?? null) : null;
  return { appraisal, followed: { report, drawn: { first, last, rows }, asFoundCurve, unread: firstUnread(core, visit) } };
}
