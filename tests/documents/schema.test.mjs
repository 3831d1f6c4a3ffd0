// The documents against their schemas: what the page, the intake and the command write, and what has to be refused.
//
// Run after the build. BANDLEAF names the command (target/release/bandleaf), BANDLEAF_PAGE the built page, and
// BANDLEAF_VISITS a list of generated visits, one a line; without it they are generated anew.

import assert from 'node:assert/strict';
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { after, before, describe, it } from 'node:test';
import { blankVisit, cellChange, withInfluence, withIntake, withPoint, withStandard } from '../../web/src/visit.js';
import { brokenReports, brokenSeals, brokenVisits } from './broken.mjs';
import {
  ajv,
  complaints,
  follow,
  leafSchema,
  properties,
  reportSchema,
  root,
  validateClosedVisit,
  validateLeaf,
  validateNumbers,
  validateReport,
  validateVisit,
  validateWholeReport,
  visitSchema,
} from './schemas.mjs';

const binary = process.env.BANDLEAF ?? join(process.env.CARGO_TARGET_DIR ?? join(root, 'target'), 'release', 'bandleaf');
const pageFile = process.env.BANDLEAF_PAGE ?? join(root, 'dist', 'bandleaf.html');
const demoDirectory = join(root, 'web', 'demo');
const pkg = join(root, 'web', 'pkg');

/** Enough for one of each kind that has no result. */
const GENERATED = 250;

/** What the program says of values outside the domain that the visit's schema states, in the generated visits. */
const DOMAIN = new Set(['coverage_out_of_range', 'noise_not_positive', 'no_terms']);

const directory = mkdtempSync(join(tmpdir(), 'bandleaf-documents-'));
after(() => rmSync(directory, { recursive: true }));

describe('the schemas', () => {
  const all = [visitSchema, reportSchema, leafSchema];

  for (const schema of all) {
    it(`${schema.title}: is one of draft 2020-12 and named by no host`, () => {
      assert.equal(schema.$schema, 'https://json-schema.org/draft/2020-12/schema');
      assert.ok(ajv.validateSchema(schema), ajv.errorsText(ajv.errors));
      assert.match(schema.$id, /^urn:bandleaf:[a-z]+:1$/);
    });

    it(`${schema.title}: describes every property in words`, () => {
      const found = properties(schema);
      assert.ok(found.length > 10, `only ${found.length} properties`);
      const bare = found.filter(({ property }) => !/^.{9,}\.$/.test(property.description ?? '')).map(({ name }) => name);
      assert.deepEqual(bare, []);
    });

    it(`${schema.title}: uses every definition`, () => {
      const text = JSON.stringify(schema);
      const unused = Object.keys(schema.$defs).filter((name) => !text.includes(`"#/$defs/${name}"`));
      assert.deepEqual(unused, []);
    });
  }
});

describe('visits', () => {
  for (const name of demoNames())
    it(`the demo ${name} is one, with nothing undocumented`, () => {
      assert.deepEqual(complaints(validateVisit, demo(name)), []);
      assert.deepEqual(complaints(validateClosedVisit, demo(name)), []);
    });

  it('the page writes them, with nothing undocumented', () => {
    let visit = withInfluence(withStandard(blankVisit('2026-05-04'), { name: 'Tape' }), 'temperature', '°C');
    const cells = [
      ['reference', '150,0', 150],
      ['indication', '151; 150', [151, 150]],
      ['uncertainty', '0.5', 0.5],
      ['influence:temperature', '14.20', 14.2],
    ];
    for (const [column, text, value] of /** @type {[string, string, any][]} */ (cells))
      visit = withPoint(visit, 0, cellChange(visit.points?.[0], column, text, value), 'as_found');
    assert.deepEqual(visit.points?.[0].typed, {
      reference: '150,0',
      indication: '151; 150',
      uncertainty: '0.5',
      influences: { temperature: '14.20' },
    });
    assert.deepEqual(complaints(validateClosedVisit, visit), []);
  });

  it('the intake writes their points, with nothing undocumented', async () => {
    const core = await import(join(pkg, 'bandleaf_wasm.js'));
    await core.default({ module_or_path: readFileSync(join(pkg, 'bandleaf_wasm_bg.wasm')) });
    const table = [
      'reference [mm];indication 1 [mm];indication 2 [mm];temperature [°C];repeats;approach;note',
      '150,0;151,0;150;14,20;1;up;first',
      '400,0;;399;14,30;1;down;',
      '700,0;x;698;14,40;1;;',
    ].join('\n');
    const intake = core.intake_text(table, { columns: { reference: 0, indication: [1, 2] } });
    const visit = withIntake(blankVisit('2026-05-04'), intake, true, 'as_left');
    assert.equal(visit.points?.length, 3, JSON.stringify(intake.problems));
    assert.deepEqual(visit.points?.[0].typed?.indication, ['151,0', '150']);
    assert.deepEqual(complaints(validateClosedVisit, visit), []);
  });

  for (const { what, at, change } of brokenVisits)
    it(`are refused with ${what}`, () => assertRefused(validateVisit, changed(demo('header-tank.json'), change), at));
});

describe('visits and their reports', () => {
  /** @type {any[]} */
  let visits = [];
  /** @type {any[]} */
  let reports = [];

  before(() => {
    visits = [...demoNames().map(demo), ...generated()];
    reports = visits.map(appraised);
  });

  it('are there', () => {
    assert.ok(visits.length >= 200, `only ${visits.length} visits`);
    const fitted = reports.filter((report) => report.fit !== null).length;
    assert.ok(fitted > visits.length / 2, `only ${fitted} of ${visits.length} visits have a fit`);
  });

  it('visits are accepted, or refused where the program finds values outside the domain', () => {
    let refused = 0;
    visits.forEach((visit, i) => {
      const expected = reports[i].messages.filter((/** @type {any} */ message) => DOMAIN.has(message.code)).map(placeOf);
      refused += expected.length;
      assert.deepEqual(complaints(validateVisit, visit).sort(), [...new Set(expected)].sort(), `visit ${i}`);
    });
    assert.ok(refused > 0, 'no visit was outside the domain');
  });

  it('visits hold nothing undocumented but what is so on purpose', () => {
    const undocumented = new Set(visits.flatMap((visit) => complaints(validateClosedVisit, visit)));
    const outside = new Set(visits.flatMap((visit) => complaints(validateVisit, visit)));
    assert.deepEqual(
      [...undocumented].filter((place) => !outside.has(place)),
      ['/unheard_of'],
    );
  });

  it('reports are as documented, every field', () => {
    reports.forEach((report, i) => {
      assert.deepEqual(complaints(validateReport, report), [], `report ${i}`);
      assert.deepEqual(complaints(validateWholeReport, report), [], `report ${i}`);
    });
  });

  it('every documented field is computed in some report, and none that is said to be pending', () => {
    const met = new Set();
    for (const report of reports) follow(reportSchema, report, (property) => met.add(property));
    const wrong = properties(reportSchema).filter(({ property, pending }) => met.has(property) === pending);
    assert.deepEqual(
      wrong.map(({ name }) => name),
      [],
    );
  });

  for (const { what, at, change } of brokenReports)
    it(`reports are refused with ${what}`, () => {
      const report = reports[demoNames().indexOf('header-tank.json')];
      assertRefused(validateReport, changed(report, change), at);
    });
});

describe('the command and broken visits', () => {
  for (const { what, at, change, treatment } of brokenVisits)
    it(`${what}: ${treatment}`, () => {
      const visit = changed(demo('header-tank.json'), change);
      if (treatment === 'unreadable') {
        const { status, stdout, stderr } = run(visit);
        assert.deepEqual({ status, stdout }, { status: 2, stdout: '' });
        assert.match(stderr, /^.+\.\n$/);
        return;
      }
      const places = placesIn(appraised(visit));
      if (treatment === 'kept') return;
      assert.ok(
        places.some((place) => place !== '' && isWithin(at, place)),
        `${at} is in none of ${places.join(' ')}`,
      );
    });
});

describe('the seal', () => {
  /** @type {any} */
  let seal;

  before(() => {
    const leaf = join(directory, 'leaf.html');
    const visit = join(directory, 'pressed.json');
    writeFileSync(visit, JSON.stringify({ ...demo('header-tank.json'), ask: { at: [200], readings: [[1714]] } }));
    execFileSync(binary, ['press', visit, '--out', leaf, '--page', pageFile]);
    seal = sealOf(leaf);
  });

  it('of a leaf is as documented', () => {
    assert.deepEqual(complaints(validateLeaf, seal), []);
    assert.ok(seal.report.fit.terms.length > 0 && seal.report.readings.length > 0);
  });

  it('of a leaf holds every number of the report and nothing else', () => {
    assert.deepEqual(complaints(validateNumbers, seal.report), []);
  });

  it('may lack none of those numbers', () => {
    const places = placesOfFields(seal.report);
    assert.ok(places.length > 80, `only ${places.length} fields`);
    const dispensable = places.filter((place) => {
      const copy = structuredClone(seal);
      without(copy.report, place);
      return !complaints(validateLeaf, copy).includes(`/report${place}`);
    });
    assert.deepEqual(dispensable, []);
  });

  it('of a page without a visit is as documented', () => {
    const blank = sealOf(pageFile);
    assert.equal(blank.report, null);
    assert.deepEqual(complaints(validateLeaf, blank), []);
  });

  for (const { what, at, change } of brokenSeals)
    it(`is refused with ${what}`, () => assertRefused(validateLeaf, changed(seal, change), at));
});

/** @returns {string[]} */
function demoNames() {
  return readdirSync(demoDirectory).filter((name) => name.endsWith('.json'));
}

/** @param {string} name */
function demo(name) {
  return JSON.parse(readFileSync(join(demoDirectory, name), 'utf8'));
}

/** @returns {any[]} */
function generated() {
  let list = process.env.BANDLEAF_VISITS;
  if (!list) {
    list = join(directory, 'visits.jsonl');
    const generator = ['run', '--quiet', '--locked', '--release', '-p', 'bandleaf-tests', '--bin', 'generate_visits'];
    execFileSync('cargo', [...generator, '--', String(GENERATED), list], { cwd: root, stdio: 'inherit' });
  }
  return readFileSync(list, 'utf8')
    .trimEnd()
    .split('\n')
    .map((line) => JSON.parse(line));
}

/** @param {any} visit */
function run(visit) {
  const file = join(directory, 'visit.json');
  writeFileSync(file, JSON.stringify(visit));
  const { status, stdout, stderr, error } = spawnSync(binary, ['appraise', file, '--json'], { encoding: 'utf8', maxBuffer: 1 << 28 });
  if (error) throw error;
  return { status, stdout, stderr };
}

/** The report; where there is no fit it comes with the status of a refusal. @param {any} visit */
function appraised(visit) {
  const { status, stdout, stderr } = run(visit);
  assert.notEqual(stdout, '', stderr);
  const report = JSON.parse(stdout);
  assert.equal(status, report.fit === null ? 2 : 0, stderr);
  return report;
}

/** @param {string} file */
function sealOf(file) {
  const [, text] = /<script type="application\/json" id="seal">(.*?)<\/script>/s.exec(readFileSync(file, 'utf8')) ?? [];
  assert.ok(text, `no seal in ${file}`);
  return JSON.parse(text);
}

/**
 * The places of all fields in a value, of lists those in the first entry; arguments of sentences are named freely.
 * @param {any} value
 * @param {string} [place]
 * @returns {string[]}
 */
function placesOfFields(value, place = '') {
  if (Array.isArray(value)) return value.length > 0 ? placesOfFields(value[0], `${place}/0`) : [];
  if (value === null || typeof value !== 'object' || place.endsWith('/args')) return [];
  return Object.entries(value).flatMap(([field, inner]) => [`${place}/${field}`, ...placesOfFields(inner, `${place}/${field}`)]);
}

/** @param {any} document @param {string} place */
function without(document, place) {
  const steps = place.split('/').slice(1);
  const last = /** @type {string} */ (steps.pop());
  delete steps.reduce((value, step) => value[step], document)[last];
}

/** @param {any} document @param {(document: any) => void} change */
function changed(document, change) {
  const copy = structuredClone(document);
  change(copy);
  assert.notDeepEqual(copy, document);
  return copy;
}

/**
 * A refusal names the place, and otherwise only what it is part of or what is missing in it.
 * @param {import('./schemas.mjs').Validate} validate
 * @param {any} document
 * @param {string} at
 */
function assertRefused(validate, document, at) {
  const places = complaints(validate, document);
  assert.ok(places.includes(at), `${at} is not in ${JSON.stringify(places)}`);
  assert.deepEqual(
    places.filter((place) => !isWithin(at, place) && !isWithin(place, at)),
    [],
  );
}

/** @param {string} place @param {string} other a place that holds it */
function isWithin(place, other) {
  return place === other || place.startsWith(`${other}/`);
}

/** The place of a message, `points[6].indication`, as a JSON pointer. @param {{ place: string }} message */
function placeOf({ place }) {
  return place === '' ? '' : `/${place.replaceAll('[', '.').replaceAll(']', '').replaceAll('.', '/')}`;
}

/** The places of all messages of a report; those of readings as places in the visit. @param {any} report @returns {string[]} */
function placesIn(report) {
  const ofReadings = report.readings.flatMap((/** @type {any} */ reading, /** @type {number} */ i) =>
    reading.messages.map((/** @type {any} */ message) => `/ask/readings/${i}${placeOf(message)}`),
  );
  return [...report.messages.map(placeOf), ...ofReadings];
}
