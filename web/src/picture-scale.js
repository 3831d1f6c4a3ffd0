// A linear scale with its ticks. d3-array chooses the ticks and d3-scale their format; the map itself is one line, and
// d3's own brings colour spaces and interpolators that nothing here uses, some 20 kB of every leaf.

import { ticks } from 'd3-array';
import { tickFormat } from 'd3-scale';

/**
 * @typedef {{
 *   (value: number): number, invert(place: number): number, ticks(count: number): number[],
 *   tickFormat(count: number, specifier: string): (value: number) => string
 * }} Scale
 */

/**
 * @param {[number, number]} domain both different
 * @param {[number, number]} range both different
 * @returns {Scale}
 */
export function linearScale([first, last], [start, end]) {
  const scale = (/** @type {number} */ value) => start + ((value - first) / (last - first)) * (end - start);
  return Object.assign(scale, {
    invert: (/** @type {number} */ place) => first + ((place - start) / (end - start)) * (last - first),
    ticks: (/** @type {number} */ count) => ticks(first, last, count),
    tickFormat: (/** @type {number} */ count, /** @type {string} */ specifier) => tickFormat(first, last, count, specifier),
  });
}
