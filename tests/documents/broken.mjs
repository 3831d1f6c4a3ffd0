// Documents with one thing wrong, and the place where a schema has to say so.
//
// What the program does with a broken visit: it refuses to read it ("unreadable"), reads it and names the place in a
// message ("told"), or keeps what it does not compute with yet ("kept"). Invented data.

/** @typedef {'unreadable'|'told'|'kept'} Treatment */
/** @typedef {{ what: string, at: string, change: (document: any) => void, treatment: Treatment }} Broken */

/** @type {(treatment: Treatment) => (what: string, at: string, change: (document: any) => void) => Broken} */
const by = (treatment) => (what, at, change) => ({ what, at, change, treatment });
const unreadable = by('unreadable');
const told = by('told');
const kept = by('kept');

/** @param {object} statement @returns {(visit: any) => void} */
const knowing = (statement) => (visit) => {
  visit.model.noise = { kind: 'known', standard_deviation: 2 };
  visit.model.known_before = [statement];
};

/** Changes of web/demo/header-tank.json. @type {Broken[]} */
export const brokenVisits = [
  unreadable('text in a number field', '/points/6/indication', (visit) => (visit.points[6].indication = '1901')),
  unreadable('NaN as text', '/points/2/reference', (visit) => (visit.points[2].reference = 'NaN')),
  unreadable('null among repeats', '/points/0/indication/1', (visit) => (visit.points[0].indication = [150, null, 150])),
  unreadable('null as a point', '/points/3', (visit) => (visit.points[3] = null)),
  unreadable('points as an object', '/points', (visit) => (visit.points = {})),
  unreadable('an unknown state', '/points/1/state', (visit) => (visit.points[1].state = 'as_repaired')),
  unreadable('an unknown approach', '/points/1/approach', (visit) => (visit.points[1].approach = 'sideways')),
  unreadable('a note as a number', '/points/5/note', (visit) => (visit.points[5].note = 1)),
  unreadable('text as an influence', '/points/0/influences/temperature', (visit) => (visit.points[0].influences = { temperature: 'warm' })),
  unreadable('another version', '/schema', (visit) => (visit.schema = 'bandleaf.visit.2')),
  unreadable('an instrument as a list', '/instrument', (visit) => (visit.instrument = [])),
  unreadable('a range of one value', '/instrument/range', (visit) => (visit.instrument.range = [0])),
  unreadable('three hard limits', '/instrument/hard_limits', (visit) => (visit.instrument.hard_limits = [0, null, 1])),
  unreadable('an unknown nominal', '/instrument/output/nominal/kind', (visit) => (visit.instrument.output.nominal.kind = 'cubic')),
  unreadable('no output range', '/instrument/output/nominal/range', (visit) => (visit.instrument.output.nominal = { kind: 'linear' })),
  unreadable(
    'text as an uncertainty',
    '/standards/0/errors/0/standard_uncertainty',
    (visit) => (visit.standards[0].errors[0].standard_uncertainty = '0.5'),
  ),
  unreadable('an unknown orientation', '/model/orientation', (visit) => (visit.model.orientation = 'backwards')),
  unreadable('a number as a term', '/model/terms/1', (visit) => (visit.model.terms[1] = 2)),
  unreadable('a shape without kind', '/model/terms/kind', (visit) => (visit.model.terms = { degree: 2 })),
  unreadable('half a degree', '/model/terms/degree', (visit) => (visit.model.terms = { kind: 'polynomial', degree: 2.5 })),
  unreadable('an unknown noise', '/model/noise/kind', (visit) => (visit.model.noise.kind = 'guessed')),
  unreadable('an unknown profile', '/model/noise/profile/kind', (visit) => (visit.model.noise.profile = { kind: 'stepped' })),
  unreadable('no growth', '/model/noise/profile/rho', (visit) => (visit.model.noise.profile = { kind: 'proportional' })),
  unreadable('an unknown statement', '/model/known_before/0/kind', knowing({ kind: 'hoped' })),
  unreadable('no precision', '/model/known_before/0/precision', knowing({ kind: 'shrinkage' })),
  unreadable('an unknown basis', '/model/known_before/0/basis', knowing({ kind: 'shrinkage', precision: 1, basis: 'rotated' })),
  unreadable('no means', '/model/known_before/0/mean', knowing({ kind: 'coefficients', standard_uncertainty: [1, 1, 1] })),
  unreadable('no covariance', '/model/known_before/0/covariance_over_variance', knowing({ kind: 'conjugate', mean: [0, 1, 0] })),
  unreadable(
    'text as a mean',
    '/model/known_before/0/mean/1',
    knowing({ kind: 'coefficients', mean: [0, '1', 0], standard_uncertainty: [1, 1, 1] }),
  ),
  unreadable('a switch as text', '/model/suspects/enabled', (visit) => (visit.model.suspects = { enabled: 'yes' })),
  unreadable('a shape as text', '/model/candidates/0', (visit) => (visit.model.candidates = ['x'])),
  unreadable('a limit as text', '/tolerance/constant', (visit) => (visit.tolerance.constant = '4')),
  unreadable('a probability as text', '/coverage', (visit) => (visit.coverage = '0.95')),
  unreadable('a setting as text', '/plan/admissible/1', (visit) => (visit.plan = { admissible: [150, 'low'] })),
  unreadable('a condition as text', '/conditions/temperature', (visit) => (visit.conditions = { temperature: '20' })),
  unreadable('a reading as text', '/ask/readings/0', (visit) => (visit.ask.readings = ['1714'])),
  unreadable('text among repeats of a reading', '/ask/readings/0/1', (visit) => (visit.ask.readings = [[1714, '1715']])),
  unreadable('a reading without indications', '/ask/readings/0/indications', (visit) => (visit.ask.readings = [{ resolution: 1 }])),
  unreadable(
    'a known value without uncertainty',
    '/ask/readings/0/known/standard_uncertainty',
    (visit) => (visit.ask.readings = [{ indications: [1714], known: { mean: 1700 } }]),
  ),
  unreadable('a place without its value', '/ask/at/0/x', (visit) => (visit.ask.at = [{ influences: {} }])),
  told('no points', '/points', (visit) => delete visit.points),
  told('no terms at all', '/model/terms', (visit) => delete visit.model.terms),
  told('an empty list of terms', '/model/terms', (visit) => (visit.model.terms = [])),
  told('a degree of 13', '/model/terms/degree', (visit) => (visit.model.terms = { kind: 'polynomial', degree: 13 })),
  told('a coverage above 1', '/coverage', (visit) => (visit.coverage = 1.5)),
  told('a number beyond computing', '/points/2/reference', (visit) => (visit.points[2].reference = 1e101)),
  told('a negative uncertainty', '/points/4/indication_uncertainty', (visit) => (visit.points[4].indication_uncertainty = -1)),
  told('a mean of nothing', '/points/4/repeats', (visit) => (visit.points[4].repeats = 0)),
  told('known noise without its size', '/model/noise/standard_deviation', (visit) => (visit.model.noise = { kind: 'known' })),
  told(
    'stated noise without degrees of freedom',
    '/model/noise/degrees_of_freedom',
    (visit) => (visit.model.noise = { kind: 'stated', standard_deviation: 2 }),
  ),
  told('noise that shrinks', '/model/noise/profile/rho', (visit) => (visit.model.noise.profile = { kind: 'proportional', rho: -0.5 })),
  told('a precision of 0', '/model/known_before/0/precision', knowing({ kind: 'shrinkage', precision: 0 })),
  told(
    'a coefficient known exactly',
    '/model/known_before/0/standard_uncertainty/0',
    knowing({ kind: 'coefficients', mean: [0, 1, 0], standard_uncertainty: [0, 1, 1] }),
  ),
  told(
    'coefficients without uncertainty',
    '/model/known_before/0/standard_uncertainty',
    knowing({ kind: 'coefficients', mean: [0, 1, 0] }),
  ),
  told(
    'a value known exactly',
    '/ask/readings/0/known/standard_uncertainty',
    (visit) => (visit.ask.readings = [{ indications: [1714], known: { mean: 1700, standard_uncertainty: 0 } }]),
  ),
  told('a negative resolution', '/ask/readings/0/resolution', (visit) => (visit.ask.readings = [{ indications: [1714], resolution: -1 }])),
  kept('an unknown common error', '/standards/0/errors/0/kind', (visit) => (visit.standards[0].errors[0].kind = 'hysteresis')),
  kept('an unknown combination', '/tolerance/combine', (visit) => (visit.tolerance.combine = 'product')),
  kept('an unknown side', '/tolerance/refers_to', (visit) => (visit.tolerance.refers_to = 'middle')),
  kept('an unknown rule', '/tolerance/rule/kind', (visit) => (visit.tolerance.rule.kind = 'coin')),
  kept('a limit without its place', '/tolerance/table/0/x', (visit) => (visit.tolerance.table = [{ lower: -4, upper: 4 }])),
  kept('an unknown objective', '/plan/objective', (visit) => (visit.plan = { objective: 'cheapest' })),
  kept('places without their number', '/plan/evaluate', (visit) => (visit.plan = { evaluate: [150, 2400] })),
  kept('another word for a precision', '/model/known_before/0/precision', knowing({ kind: 'shrinkage', precision: 'guessed' })),
  kept('half an interval', '/model/known_before/0/values/0', knowing({ kind: 'values', values: [{ x: 150, lower: 149 }] })),
  kept('a text that was not text', '/points/0/typed/reference', (visit) => (visit.points[0].typed = { reference: 150 })),
  kept('an earlier visit inside an earlier one', '/earlier/0/earlier', (visit) => (visit.earlier[0].earlier = [{ points: [] }])),
  kept('an earlier visit without points', '/earlier/0/points', (visit) => delete visit.earlier[0].points),
];

/** @typedef {{ what: string, at: string, change: (document: any) => void }} BrokenOutput */

/** Changes of the report of that visit. @type {BrokenOutput[]} */
export const brokenReports = [
  { what: 'an undocumented field', at: '/fit/mood', change: (report) => (report.fit.mood = 'good') },
  {
    what: 'an undocumented field deep inside',
    at: '/readings/0/value/density/z',
    change: (report) => (report.readings[0].value.density.z = []),
  },
  { what: 'NaN as text', at: '/fit/terms/0/estimate', change: (report) => (report.fit.terms[0].estimate = 'NaN') },
  { what: 'NaN', at: '/fit/terms/0/estimate', change: (report) => (report.fit.terms[0].estimate = Number.NaN) },
  { what: 'infinity', at: '/points/0/leverage', change: (report) => (report.points[0].leverage = Number.POSITIVE_INFINITY) },
  {
    what: 'a negative uncertainty',
    at: '/readings/0/value/expanded_uncertainty',
    change: (report) => (report.readings[0].value.expanded_uncertainty = -1),
  },
  { what: 'a probability above 1', at: '/points/0/left_out_tail', change: (report) => (report.points[0].left_out_tail = 1.1) },
  { what: 'half an interval', at: '/readings/0/value/interval', change: (report) => report.readings[0].value.interval.pop() },
  { what: 'an unknown state', at: '/state', change: (report) => (report.state = 'as_hoped') },
  { what: 'an unknown flag', at: '/readings/0/flags/0', change: (report) => (report.readings[0].flags = ['lucky']) },
  { what: 'an unknown level', at: '/messages/0/level', change: (report) => (report.messages[0].level = 'panic') },
  { what: 'a digest cut short', at: '/visit_digest', change: (report) => (report.visit_digest = report.visit_digest.slice(0, -1)) },
  { what: 'no median', at: '/readings/0/value/median', change: (report) => delete report.readings[0].value.median },
  {
    what: 'a report of points as found inside itself',
    at: '/as_found/as_found',
    change: (report) => (report.as_found = { ...report, as_found: structuredClone(report) }),
  },
];

/** Changes of the seal of a leaf of that visit. @type {BrokenOutput[]} */
export const brokenSeals = [
  { what: 'another format', at: '/schema', change: (seal) => (seal.schema = 'bandleaf.leaf.2') },
  { what: 'a digest in capitals', at: '/digests/wasm', change: (seal) => (seal.digests.wasm = seal.digests.wasm.toUpperCase()) },
  { what: 'no digest of a part', at: '/digests/style', change: (seal) => delete seal.digests.style },
  { what: 'a report without its visit', at: '/digests/visit', change: (seal) => (seal.digests.visit = null) },
  {
    what: 'digests without their report',
    at: '/digests/report',
    change: (seal) => Object.assign(seal, { report: null, digests: { ...seal.digests, visit: null } }),
  },
  { what: 'an undocumented field', at: '/owner', change: (seal) => (seal.owner = 'me') },
  { what: 'a drawn curve', at: '/report/curve', change: (seal) => (seal.report.curve = null) },
  { what: 'the version in the report', at: '/report/program/version', change: (seal) => (seal.report.program.version = '0.1.0') },
  { what: 'a method as text', at: '/program/method', change: (seal) => (seal.program.method = '1') },
];
