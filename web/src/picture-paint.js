// Draws a scene on a canvas. Ink on paper: one green for the curve and its bands, ink for what was measured.

/** @import { Scale } from './picture-scale.js' */
/** @import { Mark, Plumb, Scene } from './picture-scene.js' */
import { max } from 'd3-array';
import { linearScale } from './picture-scale.js';

const MARGIN = { top: 14, right: 16, bottom: 40 };
const RADIUS = 4.5;
const MANY_MARKS = 4000;
const SHADOW = 44;

/** @typedef {{ x: Scale, y: Scale, width: number, height: number, left: number, yTicks: number[], yFormat: (value: number) => string }} Frame */
/** @typedef {Record<'ink'|'muted'|'grid'|'leaf'|'band'|'wide'|'card'|'ochre'|'shadow', string>} Inks */

/**
 * The inks of the present mode, from the style sheet.
 * @param {Element} element
 * @returns {Inks}
 */
export function inksOf(element) {
  const style = getComputedStyle(element);
  const ink = (/** @type {string} */ name) => style.getPropertyValue(name).trim();
  return {
    ink: ink('--ink'),
    muted: ink('--muted'),
    grid: ink('--grid'),
    leaf: ink('--leaf'),
    band: ink('--band'),
    wide: ink('--band-wide'),
    card: ink('--card'),
    ochre: ink('--ochre'),
    shadow: ink('--shadow'),
  };
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {number} width
 * @param {number} height
 * @returns {Frame}
 */
export function frameOf(context, scene, width, height) {
  const y = linearScale(scene.y, [height - MARGIN.bottom, MARGIN.top]);
  const count = Math.max(3, Math.floor(height / 48));
  const yTicks = y.ticks(count);
  const plain = y.tickFormat(count, scene.signed ? '+f' : 'f');
  const yFormat = (/** @type {number} */ value) => (value === 0 ? '0' : plain(value));
  context.font = fontOf();
  const widest = max(yTicks, (tick) => context.measureText(yFormat(tick)).width) ?? 0;
  const left = Math.ceil(widest) + 34;
  return { x: linearScale(scene.x, [left, width - MARGIN.right]), y, width, height, left, yTicks, yFormat };
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {Frame} frame
 * @param {Inks} inks
 */
export function paint(context, scene, frame, inks) {
  context.clearRect(0, 0, frame.width, frame.height);
  context.font = fontOf();
  if (scene.marks.length === 0 && scene.curve.length === 0) {
    context.fillStyle = inks.muted;
    context.textAlign = 'center';
    context.fillText('Points appear here as they are entered.', frame.width / 2, frame.height / 2);
    return;
  }
  axes(context, scene, frame, inks);
  context.save();
  context.beginPath();
  context.rect(frame.left, MARGIN.top - 8, frame.width - frame.left - MARGIN.right + 8, frame.height - MARGIN.bottom - MARGIN.top + 8);
  context.clip();
  bands(context, scene, frame, inks);
  zeroLine(context, scene, frame, inks);
  if (scene.plumb) plumb(context, scene.plumb, frame, inks);
  lines(context, scene, frame, inks);
  marks(context, scene, frame, inks);
  if (scene.plumb) label(context, scene, scene.plumb, frame, inks);
  context.restore();
}

/**
 * A hairline at the place that is read off.
 * @param {CanvasRenderingContext2D} context
 * @param {Frame} frame
 * @param {number|null} x
 * @param {number|null} y
 * @param {Inks} inks
 */
export function paintReadOff(context, frame, x, y, inks) {
  context.clearRect(0, 0, frame.width, frame.height);
  if (x === null) return;
  context.strokeStyle = inks.ink;
  context.lineWidth = 1;
  stroke(context, [
    [frame.x(x), MARGIN.top],
    [frame.x(x), frame.height - MARGIN.bottom],
  ]);
  if (y === null) return;
  context.beginPath();
  context.arc(frame.x(x), frame.y(y), 3, 0, 2 * Math.PI);
  context.fillStyle = inks.leaf;
  context.fill();
}

/**
 * The mark nearest to a place on the canvas, within reach.
 * @param {Scene} scene
 * @param {Frame} frame
 * @param {number} left
 * @param {number} top
 * @param {number} reach
 * @returns {Mark|null}
 */
export function markNear(scene, frame, left, top, reach) {
  let nearest = null;
  let least = reach;
  for (const mark of scene.marks) {
    const distance = Math.hypot(frame.x(mark.x) - left, frame.y(mark.y) - top);
    if (distance <= least) [nearest, least] = [mark, distance];
  }
  return nearest;
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {Frame} frame
 * @param {Inks} inks
 */
function axes(context, scene, frame, inks) {
  const { x, y, left, width, height } = frame;
  const right = width - MARGIN.right;
  const bottom = height - MARGIN.bottom;
  const count = Math.max(2, Math.floor((right - left) / 110));
  const xFormat = x.tickFormat(count, 'f');
  context.lineWidth = 1;
  context.textBaseline = 'middle';
  context.textAlign = 'right';
  for (const tick of frame.yTicks) {
    context.strokeStyle = inks.grid;
    stroke(context, [
      [left, crisp(y(tick))],
      [right, crisp(y(tick))],
    ]);
    context.fillStyle = inks.muted;
    context.fillText(frame.yFormat(tick), left - 8, y(tick));
  }
  context.textAlign = 'center';
  context.textBaseline = 'top';
  context.strokeStyle = inks.muted;
  for (const tick of x.ticks(count)) {
    stroke(context, [
      [crisp(x(tick)), bottom],
      [crisp(x(tick)), bottom + 4],
    ]);
    context.fillText(xFormat(tick), x(tick), bottom + 7);
  }
  context.fillStyle = inks.ink;
  context.fillText(scene.xLabel, (left + right) / 2, bottom + 23);
  context.save();
  context.translate(12, (MARGIN.top + bottom) / 2);
  context.rotate(-Math.PI / 2);
  context.textBaseline = 'middle';
  context.fillText(scene.yLabel, 0, 0);
  context.restore();
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {Frame} frame
 * @param {Inks} inks
 */
function bands(context, scene, frame, inks) {
  const edge = (/** @type {'lo'|'hi'|'newLo'|'newHi'} */ side) =>
    scene.curve.filter((place) => Number.isFinite(place[side])).map((place) => pixel(frame, place.x, place[side]));
  area(context, edge('newLo'), edge('newHi'), inks.wide);
  context.strokeStyle = inks.band;
  context.lineWidth = 1;
  stroke(context, edge('newLo'));
  stroke(context, edge('newHi'));
  area(context, edge('lo'), edge('hi'), inks.band);
}

/**
 * Where errors, residuals and corrections are zero: over the bands, so that it can be seen which of them hold it.
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {Frame} frame
 * @param {Inks} inks
 */
function zeroLine(context, scene, frame, inks) {
  if (!scene.signed) return;
  context.strokeStyle = inks.muted;
  context.lineWidth = 1;
  stroke(context, [
    [frame.left, crisp(frame.y(0))],
    [frame.width - MARGIN.right, crisp(frame.y(0))],
  ]);
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {Frame} frame
 * @param {Inks} inks
 */
function lines(context, scene, frame, inks) {
  const { spanned } = scene;
  const at = (/** @type {(x: number) => boolean} */ keep) => scene.curve.filter(({ x }) => keep(x)).map(({ x, y }) => pixel(frame, x, y));
  context.lineWidth = 2.25;
  context.strokeStyle = inks.leaf;
  stroke(
    context,
    at((x) => !spanned || (x >= spanned[0] && x <= spanned[1])),
  );
  context.setLineDash([6, 5]);
  if (spanned) {
    stroke(
      context,
      at((x) => x <= spanned[0]),
    );
    stroke(
      context,
      at((x) => x >= spanned[1]),
    );
  }
  context.setLineDash([2, 4]);
  context.lineWidth = 1.5;
  context.strokeStyle = inks.muted;
  stroke(
    context,
    scene.earlier.map(({ x, y }) => pixel(frame, x, y)),
  );
  context.setLineDash([]);
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {Frame} frame
 * @param {Inks} inks
 */
function marks(context, scene, frame, inks) {
  if (scene.marks.length > MANY_MARKS) {
    context.fillStyle = inks.ink;
    for (const { x, y } of scene.marks) context.fillRect(frame.x(x) - 0.75, frame.y(y) - 0.75, 1.5, 1.5);
    return;
  }
  for (const mark of scene.marks) {
    context.strokeStyle = mark.aside ? inks.muted : inks.ink;
    context.lineWidth = 1.5;
    if (mark.bar !== null) stroke(context, [pixel(frame, mark.x, mark.y - mark.bar), pixel(frame, mark.x, mark.y + mark.bar)]);
  }
  for (const mark of scene.marks) {
    outline(context, mark, frame.x(mark.x), frame.y(mark.y));
    context.fillStyle = mark.aside ? inks.card : mark.glyph === 'square' ? inks.muted : inks.ink;
    context.strokeStyle = mark.aside ? inks.ink : inks.card;
    context.lineWidth = mark.aside ? 1.75 : 1.5;
    context.fill();
    context.stroke();
  }
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Mark} mark
 * @param {number} x
 * @param {number} y
 */
function outline(context, { glyph }, x, y) {
  context.beginPath();
  if (glyph === 'circle') {
    context.arc(x, y, RADIUS, 0, 2 * Math.PI);
  } else if (glyph === 'square') {
    context.rect(x - RADIUS + 0.5, y - RADIUS + 0.5, 2 * RADIUS - 1, 2 * RADIUS - 1);
  } else {
    const tip = glyph === 'up' ? -1 : 1;
    context.moveTo(x, y + tip * (RADIUS + 1.5));
    context.lineTo(x + RADIUS + 1, y - tip * RADIUS);
    context.lineTo(x - RADIUS - 1, y - tip * RADIUS);
    context.closePath();
  }
}

/**
 * The plumb line from the curve to the axis of the values, where it casts its density as a shadow.
 * @param {CanvasRenderingContext2D} context
 * @param {Plumb} line
 * @param {Frame} frame
 * @param {Inks} inks
 */
function plumb(context, line, frame, inks) {
  const bottom = frame.height - MARGIN.bottom;
  const [x, y] = pixel(frame, line.x, line.y);
  if (line.density) shadow(context, line, frame, inks);
  context.strokeStyle = inks.ink;
  context.lineWidth = 1.5;
  stroke(context, [
    [x, y],
    [x, bottom],
  ]);
  if (line.indication !== null || (!line.acrossX && line.density))
    stroke(context, [
      [frame.left, y],
      [x, y],
    ]);
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {Plumb} line
 * @param {Frame} frame
 * @param {Inks} inks
 */
function shadow(context, line, frame, inks) {
  const { at, density } = /** @type {NonNullable<Plumb['density']>} */ (line.density);
  const greatest = max(density) ?? 0;
  if (!(greatest > 0)) return;
  const bottom = frame.height - MARGIN.bottom;
  const place = (/** @type {number} */ value, /** @type {number} */ share) =>
    /** @type {[number, number]} */ (
      line.acrossX ? [frame.x(value), bottom - share * SHADOW] : [frame.left + share * SHADOW, frame.y(value)]
    );
  area(
    context,
    at.map((value) => place(value, 0)),
    at.map((value, index) => place(value, density[index] / greatest)),
    inks.shadow,
  );
}

/**
 * The value beside the plumb line, where it hides no mark if there is such a place.
 * @param {CanvasRenderingContext2D} context
 * @param {Scene} scene
 * @param {Plumb} line
 * @param {Frame} frame
 * @param {Inks} inks
 */
function label(context, scene, line, frame, inks) {
  if (line.x < scene.x[0] || line.x > scene.x[1]) return;
  context.font = fontOf('bold');
  const width = context.measureText(line.label).width;
  const [start, height] = labelPlace(scene, line, frame, width);
  context.textAlign = 'left';
  context.textBaseline = 'middle';
  context.globalAlpha = 0.85;
  context.fillStyle = inks.card;
  context.fillRect(start - 4, height - 9, width + 8, 18);
  context.globalAlpha = 1;
  context.fillStyle = inks.ink;
  context.fillText(line.label, start, height);
  context.font = fontOf();
}

/**
 * @param {Scene} scene
 * @param {Plumb} line
 * @param {Frame} frame
 * @param {number} width
 * @returns {[number, number]}
 */
function labelPlace(scene, line, frame, width) {
  const bottom = frame.height - MARGIN.bottom;
  const [x, y] = pixel(frame, line.x, line.y);
  const sides = [x + 8, x - 8 - width].filter((start) => start > frame.left && start + width < frame.width - MARGIN.right + 4);
  const heights = [bottom - SHADOW - 8, bottom - 14, y + 20, y - 20, MARGIN.top + 8].map((height) =>
    Math.min(bottom - 14, Math.max(MARGIN.top + 8, height)),
  );
  const places = heights.flatMap((height) => sides.map((start) => /** @type {[number, number]} */ ([start, height])));
  const hides = (/** @type {[number, number]} */ [start, height]) =>
    scene.marks.some((mark) => {
      const [left, top] = pixel(frame, mark.x, mark.y);
      return left > start - 12 && left < start + width + 12 && Math.abs(top - height) < 16;
    });
  return places.find((place) => !hides(place)) ?? places[0] ?? [frame.left + 8, MARGIN.top + 8];
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {[number, number][]} lower
 * @param {[number, number][]} upper
 * @param {string} ink
 */
function area(context, lower, upper, ink) {
  if (lower.length < 2) return;
  context.beginPath();
  context.moveTo(...lower[0]);
  for (const place of lower) context.lineTo(...place);
  for (const place of upper.slice().reverse()) context.lineTo(...place);
  context.closePath();
  context.fillStyle = ink;
  context.fill();
}

/**
 * @param {CanvasRenderingContext2D} context
 * @param {[number, number][]} places
 */
function stroke(context, places) {
  if (places.length < 2) return;
  context.beginPath();
  context.moveTo(...places[0]);
  for (const place of places.slice(1)) context.lineTo(...place);
  context.stroke();
}

/**
 * On the canvas, never so far outside that browsers lose the line.
 * @param {Frame} frame
 * @param {number} x
 * @param {number} y
 * @returns {[number, number]}
 */
function pixel(frame, x, y) {
  return [frame.x(x), Math.max(-20000, Math.min(20000, frame.y(y)))];
}

/** @param {number} place */
function crisp(place) {
  return Math.round(place) + 0.5;
}

function fontOf(weight = '') {
  return `${weight} 12px system-ui, "Segoe UI", Roboto, "DejaVu Sans", sans-serif`.trim();
}
