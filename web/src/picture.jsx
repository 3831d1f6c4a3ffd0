// The picture: a canvas with the curve, its bands, the points and the reading; read off with the pointer or arrow keys.

/** @import { Parts } from './store.js' */
/** @import { View } from './types.js' */
/** @import { Frame } from './picture-paint.js' */
import { useEffect, useMemo, useRef, useState } from 'preact/hooks';
import { frameOf, inksOf, markNear, paint, paintReadOff } from './picture-paint.js';
import { orientationOf } from './picture-range.js';
import { asError, heightAt, plumbOf, sceneOf, viewOf, viewsOf } from './picture-scene.js';
import { PictureTable } from './picture-table.jsx';
import { percent } from './words.js';

const REACH = 16;
const STEP = 0.01;

/** @param {Parts & { plain?: boolean }} props */
export function Picture({ core, store, state, dispatch, plain }) {
  const view = viewOf(state);
  const [place, setPlace] = useState(/** @type {number|null} */ (null));
  const said = place === null ? null : readOffWords(core, store, state, place);
  return (
    <section class="picture" aria-labelledby="picture-title">
      <div class="part-head">
        <h2 id="picture-title" class={plain ? 'unseen' : undefined}>
          Picture
        </h2>
        {said && view !== 'table' ? <p class="read-off">{said}</p> : <Legend state={state} view={view} />}
        {!plain && (
          <div class="views" role="group" aria-label="View">
            {viewsOf(state).map((name) => (
              <button
                key={name}
                type="button"
                aria-pressed={name === view}
                onClick={() => dispatch({ type: 'show', change: { view: name } })}
              >
                {name}
              </button>
            ))}
          </div>
        )}
      </div>
      {view === 'table' ? (
        <PictureTable {...{ core, store, state, dispatch }} />
      ) : (
        <Canvas {...{ core, store, state, dispatch, place, setPlace, said }} />
      )}
    </section>
  );
}

/** @param {Parts & { place: number|null, setPlace: (place: number|null) => void, said: string|null }} props */
function Canvas({ core, store, state, dispatch, place, setPlace, said }) {
  const box = useRef(/** @type {HTMLDivElement|null} */ (null));
  const base = useRef(/** @type {HTMLCanvasElement|null} */ (null));
  const over = useRef(/** @type {HTMLCanvasElement|null} */ (null));
  const frame = useRef(/** @type {Frame|null} */ (null));
  const { size, repaints } = useSize(box);
  const still = useMemo(() => sceneOf(state), [state.visit, state.report, state.drawn, state.view]);
  const scene = useMemo(() => ({ ...still, plumb: plumbOf(state, still) }), [still, state.answer]);
  useEffect(() => {
    const context = prepared(base.current, size);
    if (!context || !box.current) return;
    frame.current = frameOf(context, scene, size.width, size.height);
    paint(context, scene, frame.current, inksOf(box.current));
  }, [scene, size, repaints, state.mode]);
  useEffect(() => {
    const context = prepared(over.current, size);
    if (!context || !frame.current || !box.current) return;
    paintReadOff(
      context,
      frame.current,
      place,
      place === null || scene.curve.length === 0 ? null : heightAt(scene.curve, place),
      inksOf(box.current),
    );
  }, [place, scene, size, repaints]);

  const [first, last] = scene.x;
  const at = (/** @type {PointerEvent|MouseEvent} */ event) => {
    const { left, top } = /** @type {HTMLElement} */ (event.currentTarget).getBoundingClientRect();
    return [event.clientX - left, event.clientY - top];
  };
  const move = (/** @type {PointerEvent} */ event) => {
    const x = frame.current?.x.invert(at(event)[0]);
    setPlace(x === undefined || x < first || x > last ? null : x);
  };
  const open = (/** @type {MouseEvent} */ event) => {
    const [left, top] = at(event);
    const mark = frame.current && markNear(scene, frame.current, left, top, REACH);
    if (mark) dispatch({ type: 'panel', panel: { name: 'point', point: mark.point } });
  };
  const key = (/** @type {KeyboardEvent} */ event) => {
    const next = afterKey(
      event,
      place ?? (first + last) / 2,
      first,
      last,
      scene.marks.map((mark) => mark.x),
    );
    if (event.key === 'Escape') setPlace(null);
    if (event.key === 'Enter' && place !== null) {
      const mark = scene.marks.find(({ x }) => x === place);
      if (mark) dispatch({ type: 'panel', panel: { name: 'point', point: mark.point } });
    }
    if (next === null) return;
    event.preventDefault();
    setPlace(next);
  };
  const now = place ?? (first + last) / 2;
  return (
    <div class="canvas-box" ref={box}>
      <canvas ref={base} role="img" aria-label={summary(core, store, state)} />
      <canvas ref={over} />
      <div
        class="read-off-surface"
        role="slider"
        tabIndex={0}
        aria-label="Read off the curve: arrow keys move, up and down go from point to point, Enter opens the point"
        aria-valuemin={first}
        aria-valuemax={last}
        aria-valuenow={now}
        aria-valuetext={said ?? 'not reading off'}
        onPointerMove={move}
        onPointerDown={move}
        onPointerLeave={(event) => event.pointerType === 'mouse' && setPlace(null)}
        onBlur={() => setPlace(null)}
        onClick={open}
        onKeyDown={key}
      />
    </div>
  );
}

/** @param {{ state: Parts['state'], view: View }} props */
function Legend({ state, view }) {
  if (!state.report?.fit || view === 'table') return <p class="legend" />;
  const approaches = (state.visit.points ?? []).some((point) => point.approach);
  return (
    <p class="legend">
      <span class="key line">curve</span>
      <span class="key band">its band, {percent(state.report.coverage)}</span>
      <span class="key wide">new indication</span>
      {approaches && <span class="key">▲ rising ▼ falling</span>}
      {state.asFoundCurve && <span class="key">■ as found</span>}
    </p>
  );
}

/**
 * Size of the box on the screen, and a count that changes when the inks may have changed.
 * @param {import('preact').RefObject<HTMLDivElement|null>} box
 */
function useSize(box) {
  const [size, setSize] = useState({ width: 0, height: 0 });
  const [repaints, setRepaints] = useState(0);
  useEffect(() => {
    const watch = new ResizeObserver(([entry]) => setSize({ width: entry.contentRect.width, height: entry.contentRect.height }));
    if (box.current) watch.observe(box.current);
    const again = () => setRepaints((count) => count + 1);
    const dark = matchMedia('(prefers-color-scheme: dark)');
    dark.addEventListener('change', again);
    globalThis.addEventListener('bandleaf-inks', again);
    return () => {
      watch.disconnect();
      dark.removeEventListener('change', again);
      globalThis.removeEventListener('bandleaf-inks', again);
    };
  }, []);
  return { size, repaints };
}

/**
 * A canvas with as many pixels as the screen has.
 * @param {HTMLCanvasElement|null} canvas
 * @param {{ width: number, height: number }} size
 */
function prepared(canvas, { width, height }) {
  const context = canvas?.getContext('2d');
  if (!canvas || !context || width === 0 || height === 0) return null;
  const ratio = globalThis.devicePixelRatio || 1;
  const [across, down] = [Math.round(width * ratio), Math.round(height * ratio)];
  if (canvas.width !== across) canvas.width = across;
  if (canvas.height !== down) canvas.height = down;
  context.setTransform(ratio, 0, 0, ratio, 0, 0);
  return context;
}

/**
 * @param {KeyboardEvent} event
 * @param {number} place
 * @param {number} first
 * @param {number} last
 * @param {number[]} marks
 * @returns {number|null}
 */
function afterKey(event, place, first, last, marks) {
  const step = (last - first) * (event.shiftKey ? 10 * STEP : STEP);
  const sorted = [...marks].sort((a, b) => a - b);
  const moves = /** @type {Record<string, number|undefined>} */ ({
    ArrowRight: Math.min(last, place + step),
    ArrowLeft: Math.max(first, place - step),
    ArrowUp: sorted.find((mark) => mark > place),
    ArrowDown: sorted.reverse().find((mark) => mark < place),
    Home: first,
    End: last,
  });
  return moves[event.key] ?? null;
}

/**
 * The numbers at a place, from the core.
 * @param {Parts['core']} core
 * @param {Parts['store']} store
 * @param {Parts['state']} state
 * @param {number} place
 */
function readOffWords(core, store, state, place) {
  const { visit, report, drawn } = state;
  const [, estimate, , lo, hi, newLo, newHi, nominal] = store.curve(place, place, 1);
  const units = report?.units;
  if (estimate === undefined || !units || !drawn) return null;
  const at = `${core.format_to(place, (drawn.last - drawn.first) / 500)} ${units.argument}`.trim();
  const half = (hi - lo) / 2;
  const indication = core.format_interval(newLo, newHi, units.response);
  const curve = core.format_value(estimate, half, units.response);
  if (viewOf(state) !== 'error') return `at ${at}: ${curve}; a new one ${indication}`;
  const error = core.format_value(asError(orientationOf(visit), estimate, nominal), half, units.response);
  return `at ${at}: error ${error}; a new indication ${indication}`;
}

/**
 * The picture in a sentence, for those who do not see it.
 * @param {Parts['core']} core
 * @param {Parts['store']} store
 * @param {Parts['state']} state
 */
function summary(core, store, state) {
  const { report } = state;
  if (!report?.fit) return `${report?.points.length ?? 0} points, no curve yet. The view “table” has the same as figures.`;
  const [from, to] = report.fit.spanned;
  const ends = [from, to].map((place) => readOffWords(core, store, state, place)).filter(Boolean);
  return `Curve ${report.fit.formula} through ${report.fit.points_used} indications. ${ends.join('. ')}. The view “table” has the same as figures.`;
}
