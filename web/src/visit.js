// Edits of a visit: pure functions that take a visit and give back a new one. Nothing here computes a result.

/** @import { Visit, Point, PointState, Instrument, Model, Standard, Typed, Intake } from './types.js' */

const INFLUENCE = 'influence:';

/**
 * An empty sheet.
 * @param {string} date ISO 8601
 * @returns {Visit}
 */
export function blankVisit(date) {
  return {
    schema: 'bandleaf.visit.1',
    instrument: {
      name: '',
      serial: '',
      place: '',
      quantity: '',
      unit: '',
      range: null,
      output: { unit: null, resolution: null, nominal: { kind: 'identity' } },
      influences: {},
    },
    standards: [],
    occasion: { date, by: '', notes: '' },
    points: [],
    model: { orientation: 'indication_from_reference', terms: ['1', 'x'], noise: { kind: 'unknown' }, known_before: [{ kind: 'flat' }] },
    coverage: 0.95,
  };
}

/**
 * @param {Visit} visit
 * @returns {Point[]}
 */
export function pointsOf(visit) {
  return visit.points ?? [];
}

/**
 * The names of the influence quantities, in the order of their columns.
 * @param {Visit} visit
 */
export function influencesOf(visit) {
  return Object.keys(visit.instrument?.influences ?? {});
}

/**
 * @param {Visit} visit
 * @param {Partial<Instrument>} change
 * @returns {Visit}
 */
export function withInstrument(visit, change) {
  return { ...visit, instrument: { ...visit.instrument, ...change } };
}

/**
 * @param {Visit} visit
 * @param {NonNullable<Instrument['output']>} change
 * @returns {Visit}
 */
export function withOutput(visit, change) {
  return withInstrument(visit, { output: { ...visit.instrument?.output, ...change } });
}

/**
 * @param {Visit} visit
 * @param {NonNullable<Visit['occasion']>} change
 * @returns {Visit}
 */
export function withOccasion(visit, change) {
  return { ...visit, occasion: { ...visit.occasion, ...change } };
}

/**
 * @param {Visit} visit
 * @param {Model} change
 * @returns {Visit}
 */
export function withModel(visit, change) {
  return { ...visit, model: { ...visit.model, ...change } };
}

/**
 * The first standard, changed; made where there is none yet, and then named by every point.
 * @param {Visit} visit
 * @param {Partial<Standard>} change
 * @returns {Visit}
 */
export function withStandard(visit, change) {
  const [first, ...others] = visit.standards ?? [];
  if (first) return { ...visit, standards: [{ ...first, ...change }, ...others] };
  const points = pointsOf(visit).map((point) => ({ ...point, standard: point.standard ?? 'S1' }));
  return { ...visit, points, standards: [{ id: 'S1', name: '', serial: '', certificate: '', due: null, errors: [], ...change }] };
}

/**
 * A new influence quantity gives every row a column.
 * @param {Visit} visit
 * @param {string} name
 * @param {string} unit
 * @returns {Visit}
 */
export function withInfluence(visit, name, unit) {
  return withInstrument(visit, { influences: { ...visit.instrument?.influences, [name]: { unit } } });
}

/**
 * @param {Visit} visit
 * @param {string} name
 * @returns {Visit}
 */
export function withoutInfluence(visit, name) {
  const { [name]: _, ...influences } = visit.instrument?.influences ?? {};
  const { [name]: __, ...conditions } = visit.conditions ?? {};
  return { ...withInstrument(visit, { influences }), conditions };
}

/**
 * One point changed; `index` one past the end adds a row.
 * @param {Visit} visit
 * @param {number} index
 * @param {Partial<Point>} change
 * @param {PointState} entering state of a row that is added
 * @returns {Visit}
 */
export function withPoint(visit, index, change, entering) {
  const points = pointsOf(visit).slice();
  points[index] = { ...(points[index] ?? newPoint(visit, entering)), ...change };
  return { ...visit, points: isEmpty(points[index]) ? points.filter((_, at) => at !== index) : points };
}

/**
 * One change for every point.
 * @param {Visit} visit
 * @param {Partial<Point>} change
 * @returns {Visit}
 */
export function withEveryPoint(visit, change) {
  return { ...visit, points: pointsOf(visit).map((point) => ({ ...point, ...change })) };
}

/**
 * @param {Visit} visit
 * @param {number} index
 * @returns {Visit}
 */
export function withoutPoint(visit, index) {
  return { ...visit, points: pointsOf(visit).filter((_, at) => at !== index) };
}

/**
 * The points that were read from a text or a file, put behind those that are there or in their place, with the units
 * and influence quantities of the header where the sheet has none yet.
 * @param {Visit} visit
 * @param {Intake} intake
 * @param {boolean} replace
 * @param {PointState} entering
 * @returns {Visit}
 */
export function withIntake(visit, intake, replace, entering) {
  let next = visit;
  const isReference = (/** @type {Intake['columns'][number]} */ column) => column.role === 'reference';
  // The unit of the reference first: the output's is stated only where it is another.
  for (const column of [...intake.columns.filter(isReference), ...intake.columns.filter((other) => !isReference(other))]) {
    const { role, unit } = column;
    if (role === 'reference' && unit && !next.instrument?.unit) next = withInstrument(next, { unit });
    if (role === 'indication' && unit && unit !== next.instrument?.unit && !next.instrument?.output?.unit)
      next = withOutput(next, { unit });
    if (role && typeof role === 'object' && !influencesOf(next).includes(role.influence)) next = withInfluence(next, role.influence, unit);
  }
  const blank = newPoint(visit, entering);
  const statesRead = intake.columns.some((column) => column.role === 'state');
  const read = intake.points.map((point) => ({
    ...point,
    state: statesRead ? point.state : entering,
    standard: point.standard ?? blank.standard,
    setting_uncertainty: point.setting_uncertainty ?? blank.setting_uncertainty,
  }));
  return { ...next, points: replace ? read : [...pointsOf(visit), ...read] };
}

/**
 * The cells of a row that hold numbers. `id` is `reference`, `indication`, `uncertainty` or `influence:` with the name.
 * @param {Visit} visit
 * @returns {{ id: string, label: string, unit: string }[]}
 */
export function columnsOf(visit) {
  const { unit, output, influences } = visit.instrument ?? {};
  const shown = output?.unit || unit || '';
  return [
    { id: 'reference', label: 'reference', unit: unit ?? '' },
    { id: 'indication', label: 'indication', unit: shown },
    ...(noisePerPoint(visit) ? [{ id: 'uncertainty', label: 'u', unit: shown }] : []),
    ...influencesOf(visit).map((name) => ({ id: INFLUENCE + name, label: name, unit: influences?.[name]?.unit ?? '' })),
  ];
}

/**
 * Whether every point states its own uncertainty, and that is the whole noise.
 * @param {Visit} visit
 */
export function noisePerPoint(visit) {
  const noise = visit.model?.noise;
  return (
    (noise?.kind === 'known' && noise.standard_deviation === 0) ||
    pointsOf(visit).some((point) => typeof point.indication_uncertainty === 'number')
  );
}

/**
 * The text that was typed into a cell; null where none is kept.
 * @param {Point} point
 * @param {string} column
 * @returns {string|null}
 */
export function typedText(point, column) {
  const kept = column.startsWith(INFLUENCE)
    ? point.typed?.influences?.[column.slice(INFLUENCE.length)]
    : point.typed?.[/** @type {'reference'} */ (column)];
  return typeof kept === 'string' ? kept : null;
}

/**
 * The parsed value of a cell.
 * @param {Point} point
 * @param {string} column
 * @returns {number|number[]|null}
 */
export function cellValue(point, column) {
  if (column === 'reference') return point.reference ?? null;
  if (column === 'indication') return point.indication ?? null;
  if (column === 'uncertainty') return point.indication_uncertainty ?? null;
  return point.influences?.[column.slice(INFLUENCE.length)] ?? null;
}

/**
 * A cell set to a value, with the text that was typed kept beside it.
 * @param {Point|undefined} point
 * @param {string} column
 * @param {string} text
 * @param {number|number[]|null} value
 * @returns {Partial<Point>}
 */
export function cellChange(point, column, text, value) {
  const typed = /** @type {Typed} */ ({ ...point?.typed });
  const single = /** @type {number|null} */ (value);
  if (column === 'reference') return { reference: single, typed: { ...typed, reference: text } };
  if (column === 'indication') return { indication: value, typed: { ...typed, indication: text } };
  if (column === 'uncertainty') return { indication_uncertainty: single, typed: { ...typed, uncertainty: text } };
  const name = column.slice(INFLUENCE.length);
  const { [name]: _, ...influences } = point?.influences ?? {};
  const known = single === null ? influences : { ...influences, [name]: single };
  return { influences: known, typed: { ...typed, influences: { ...typed.influences, [name]: text } } };
}

/**
 * @param {number|number[]|null|undefined} value
 */
export function valueText(value) {
  if (value === null || value === undefined) return '';
  return Array.isArray(value) ? value.map(String).join('; ') : String(value);
}

/**
 * @param {Visit} visit
 * @param {PointState} entering
 * @returns {Point}
 */
function newPoint(visit, entering) {
  const last = pointsOf(visit).at(-1);
  const standards = visit.standards ?? [];
  return {
    reference: null,
    indication: null,
    state: entering,
    standard: standards.length === 1 ? standards[0].id : (last?.standard ?? null),
    setting_uncertainty: last?.setting_uncertainty ?? null,
    set_aside: null,
  };
}

/** @param {Point} point */
function isEmpty(point) {
  const { influences, ...others } = point.typed ?? {};
  const texts = [...Object.values(others), ...Object.values(influences ?? {})];
  const values = [point.reference, point.indication, point.indication_uncertainty, ...Object.values(point.influences ?? {})];
  return (
    texts.every((text) => typeof text !== 'string' || text.trim() === '') &&
    values.every((value) => value === null || value === undefined) &&
    !point.note &&
    !point.set_aside
  );
}
