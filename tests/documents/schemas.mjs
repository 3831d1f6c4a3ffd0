// The schemas of the documents, compiled, and stricter forms of them for what the program writes itself.
//
// ajv, because it knows draft 2020-12 and names the place of every complaint.

import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

/** @typedef {{ [keyword: string]: any }} Schema */
/** @typedef {import('ajv/dist/2020.js').ValidateFunction} Validate */

export const root = dirname(dirname(dirname(fileURLToPath(import.meta.url))));

// The npm packages live in web/, so that there is one lock file.
const fromWeb = createRequire(new URL('../../web/package.json', import.meta.url));
const { default: Ajv } = /** @type {typeof import('ajv/dist/2020.js')} */ (fromWeb('ajv/dist/2020'));

/** The comment that marks what the program does not compute yet. */
const PENDING = 'not computed yet';

/** Keywords under which stand conditions on an object that is described elsewhere. */
const CONDITIONS = new Set(['if', 'then', 'else', 'allOf', 'anyOf']);

export const visitSchema = read('crates/core/schema/visit.schema.json');
export const reportSchema = read('crates/core/schema/report.schema.json');
export const leafSchema = read('crates/leaf/schema/leaf.schema.json');

// Conditions are fragments without a type of their own, which these two rules do not allow for.
export const ajv = new Ajv({ allErrors: true, strict: true, strictTypes: false, strictRequired: false, allowUnionTypes: true });
ajv.addSchema([visitSchema, reportSchema, leafSchema]);

export const validateVisit = compiled(visitSchema);
export const validateReport = compiled(reportSchema);
export const validateLeaf = compiled(leafSchema);

/** A visit that holds nothing undocumented. */
export const validateClosedVisit = variant(visitSchema, 'closed', (object) => {
  object.additionalProperties = false;
});

/** A report with every field that the program computes. */
export const validateWholeReport = variant(reportSchema, 'whole', requireAll);

/** What a seal holds of a report: every number, no words and no drawings. */
export const validateNumbers = variant(reportSchema, 'numbers', (object, name) => {
  for (const field of Object.keys(object.properties)) {
    const word = field === 'sentence' || field.startsWith('display') || field.endsWith('_display');
    const drawing = field === 'density' || (name === '' && field === 'curve');
    if (word || drawing || (name === 'program' && field === 'version')) delete object.properties[field];
  }
  requireAll(object);
});

/**
 * The places of which a schema complains, as JSON pointers; of a field that is missing or too many, its own place.
 * @param {Validate} validate
 * @param {unknown} value
 * @returns {string[]}
 */
export function complaints(validate, value) {
  if (validate(value)) return [];
  const places = (validate.errors ?? []).map(
    ({ keyword, instancePath, params }) =>
      instancePath +
      (keyword === 'required' ? `/${params.missingProperty}` : keyword === 'additionalProperties' ? `/${params.additionalProperty}` : ''),
  );
  return [...new Set(places)];
}

/**
 * Every property that a schema describes: its name with that of its object, its own schema, and whether it or its
 * object is marked as not computed yet.
 * @param {Schema} schema
 * @returns {{ name: string, property: Schema, pending: boolean }[]}
 */
export function properties(schema) {
  /** @type {{ name: string, property: Schema, pending: boolean }[]} */
  const found = [];
  eachObject(schema, (object, name) => {
    for (const [field, property] of Object.entries(object.properties))
      found.push({ name: `${name}.${field}`, property, pending: isPending(object) || isPending(property) });
  });
  return found;
}

/**
 * Follows a value along the schema that describes it, and tells of every property met that is neither null nor empty.
 * @param {Schema} property
 * @param {any} value
 * @param {(property: Schema) => void} met
 * @param {Schema} [document] the whole schema, in which references are looked up
 */
export function follow(property, value, met, document = property) {
  const reference = property.$ref ?? property.then?.$ref;
  const schema = reference === undefined ? property : resolved(document, reference);
  if (Array.isArray(value)) {
    if (schema.items) for (const entry of value) follow(schema.items, entry, met, document);
    return;
  }
  if (value === null || typeof value !== 'object') return;
  for (const [field, inner] of Object.entries(value)) {
    const described = schema.properties?.[field];
    if (!described || inner === null || (Array.isArray(inner) && inner.length === 0)) continue;
    met(described);
    follow(described, inner, met, document);
  }
}

/** @param {string} path @returns {Schema} */
function read(path) {
  return JSON.parse(readFileSync(join(root, path), 'utf8'));
}

/** @param {Schema} schema @returns {Validate} */
function compiled(schema) {
  const validate = ajv.getSchema(schema.$id);
  if (!validate) throw new Error(`no schema ${schema.$id}`);
  return /** @type {Validate} */ (validate);
}

/**
 * @param {Schema} schema
 * @param {string} word
 * @param {(object: Schema, name: string) => void} change
 */
function variant(schema, word, change) {
  const copy = structuredClone(schema);
  copy.$id = `${schema.$id}:${word}`;
  eachObject(copy, change);
  return ajv.compile(copy);
}

/** @param {Schema} schema */
function isPending(schema) {
  return schema.$comment === PENDING;
}

/** @param {Schema} object */
function requireAll(object) {
  object.required = Object.keys(object.properties).filter((field) => !isPending(object.properties[field]));
}

/** @param {Schema} document @param {string} reference @returns {Schema} */
function resolved(document, reference) {
  return reference
    .split('/')
    .slice(1)
    .reduce((schema, step) => schema[step], document);
}

/**
 * Every schema that describes an object with its properties; `name` is that of the definition or property.
 * @param {Schema} schema
 * @param {(object: Schema, name: string) => void} visit
 * @param {string} [name]
 */
function eachObject(schema, visit, name = '') {
  // Beside a reference stand only conditions on what the reference describes.
  if (schema.properties && [schema.type].flat().includes('object') && !schema.$ref) visit(schema, name);
  for (const [keyword, inner] of Object.entries(schema)) {
    if (CONDITIONS.has(keyword) || inner === null || typeof inner !== 'object') continue;
    if (keyword === 'properties' || keyword === '$defs') {
      for (const [field, property] of Object.entries(inner)) eachObject(property, visit, field);
    } else if (!Array.isArray(inner)) {
      eachObject(inner, visit, name);
    }
  }
}
