// Sentences about what is shown. Every number in them comes from the report or from the core's formatting.

/** @import { Core, Opened, Outcome, Problem, Report, State, Value, Visit } from './types.js' */
import { pointsOf } from './visit.js';

const FLAGS = /** @type {Record<string, string>} */ ({
  more_than_one_mode: 'More than one value fits this reading: the curve is not monotonic here, so no single value ± U is given.',
  mass_at_end: 'The value is cut off at the end of what can occur: read it as “at least” or “at most”.',
  outside_range: 'Outside the range of the instrument: not assessed.',
  unattainable: 'The curve does not reach this reading.',
  slope_too_uncertain: 'The slope is too uncertain here to turn readings into values.',
  extrapolated: 'Outside the span of the calibration points: extrapolated.',
});

const MONTHS = 'January February March April May June July August September October November December'.split(' ');

/** Sentence codes for parts of the visit that this version keeps but does not compute with. */
const RESERVED = /^not_(yet|taken)/;

/** A day in words; the browser's own formatter takes longer to make than the whole fit. @param {string|null|undefined} date ISO 8601 */
export function dateWords(date) {
  const [, year, month, day] = /^(\d{4})-(\d\d)-(\d\d)/.exec(date ?? '') ?? [];
  const name = MONTHS[Number(month) - 1];
  return name ? `${Number(day)} ${name} ${year}` : (date ?? '');
}

/** @param {string|undefined} state */
export function stateWords(state) {
  return state === 'as_left' ? 'as left' : 'as found';
}

/** @param {number} coverage */
export function percent(coverage) {
  return `${Number((coverage * 100).toPrecision(12))} %`;
}

/** @param {Visit} visit */
export function titleOf(visit) {
  return visit.instrument?.name || 'Field sheet';
}

/** Which states the points have: "as found", "as left", or both. @param {Visit} visit @param {string} entering */
export function statesOf(visit, entering) {
  const states = new Set(pointsOf(visit).map((point) => point.state ?? 'as_found'));
  if (states.size === 2) return 'as found and as left';
  return stateWords(states.size === 1 ? [...states][0] : entering);
}

/** @param {Visit} visit */
export function outputUnit(visit) {
  return visit.instrument?.output?.unit || visit.instrument?.unit || '';
}

/** @param {Problem} problem */
export function isReserved(problem) {
  return RESERVED.test(problem.code);
}

/**
 * The state of the sheet in one sentence, with what to do next.
 * @param {Core} core
 * @param {State} state
 * @returns {{ level: 'error'|'warning'|'note'|'good', lead: string, sentence: string }}
 */
export function stateSentence(core, state) {
  const { visit, report, busy, unread } = state;
  if (busy || !report) return { level: 'note', lead: 'Computing.', sentence: 'The table can be used meanwhile.' };
  if (pointsOf(visit).length === 0)
    return {
      level: 'note',
      lead: 'No points yet.',
      sentence: 'Type the first reference value and indication, paste cells, or drop a file. The sheet menu has two demos.',
    };
  if (unread) return { level: 'warning', lead: `Row ${unread.row}, ${unread.label}.`, sentence: unread.sentence };
  const error = report.messages.find((message) => message.level === 'error');
  if (error) return { level: 'error', lead: report.fit ? 'Look at this.' : 'No curve yet.', sentence: error.sentence };
  const warning = report.messages.find((message) => message.level === 'warning' && !isReserved(message));
  if (warning) return { level: 'warning', lead: report.fit ? 'Fitted, with a reservation.' : 'No curve yet.', sentence: warning.sentence };
  return {
    level: 'good',
    lead: `${report.as_found ? 'Fitted, as left' : 'Fitted'}: ${report.fit?.formula ?? ''}.`,
    sentence: `${fitWords(core, report)} Type a reading to get its value, or save the leaf.`,
  };
}

/**
 * @param {Core} core
 * @param {Report} report
 */
export function fitWords(core, report) {
  if (!report.fit) return '';
  const { points_used: used } = report.fit;
  return `${used} ${used === 1 ? 'indication' : 'indications'}, ${noiseWords(core, report)}, ${freedomWords(report)}.`;
}

/**
 * @param {Core} core
 * @param {Report} report
 */
export function noiseWords(core, report) {
  const { estimate, kind } = report.fit?.noise ?? { estimate: null, kind: '' };
  if (estimate === null || estimate === undefined) return 'noise stated point by point';
  return `${kind === 'known' ? 'known noise' : 'noise'} ${core.format_number(estimate, 2)} ${report.units.response}`.trim();
}

/** @param {Report} report */
export function freedomWords(report) {
  const freedom = report.fit?.degrees_of_freedom ?? null;
  if (freedom === null) return 'degrees of freedom ∞';
  return freedom === 1 ? '1 degree of freedom' : `${freedomFigure(freedom)} degrees of freedom`;
}

/** Degrees of freedom, a whole number as such. @param {number|null|undefined} freedom */
export function freedomFigure(freedom) {
  return freedom === null || freedom === undefined ? '∞' : String(Number(freedom.toPrecision(6)));
}

/**
 * Coverage, k and ν of a value.
 * @param {Core} core
 * @param {Report} report
 * @param {Value} value
 */
export function coverageWords(core, report, value) {
  const factor = value.value?.coverage_factor;
  const freedom = report.fit?.degrees_of_freedom;
  const k = factor === null || factor === undefined ? '' : `, k = ${core.format_number(factor, 3)}`;
  const nu = `, ν = ${freedomFigure(freedom)}`;
  return `${percent(report.coverage)}${k}${nu}`;
}

/**
 * Everything that has to be said about a reading, in words.
 * @param {Value} value
 * @returns {string[]}
 */
export function valueReservations(value) {
  const said = value.messages.map((message) => message.sentence);
  const flags = value.flags.filter((flag) => !value.messages.some((message) => message.code.includes(flag)));
  return [...said, ...flags.map((flag) => FLAGS[flag] ?? flag.replaceAll('_', ' '))];
}

export const CONDITIONS = 'At the time and under the conditions of the calibration; drift not included.';

export const CAUTION =
  'Results support, and do not replace, the judgement of a competent person. Safety-critical, medical and legally controlled measurements follow their own regulations and accredited laboratories.';

/** What the outcome of opening means, in a few words. @param {Outcome} outcome */
export function outcomeWords(outcome) {
  const words = {
    blank: 'a page without a visit',
    identical: 'identical: recomputed from the data inside to the last bit',
    same: 'same: recomputed, equal within a billionth of the uncertainty',
    earlier_method: 'computed by an earlier method: recomputed here by the present one',
    newer_program: 'written by a newer program than this one',
    differs: 'differs: the recomputed result is not the one in the file',
    altered: 'altered: this file is not as it was saved',
  };
  return words[outcome] ?? outcome;
}

/** Whether a value may be shown after opening. @param {Opened} opened */
export function isSound({ outcome, field }) {
  if (outcome === 'newer_program') return field === null;
  return outcome !== 'altered' && outcome !== 'differs';
}
