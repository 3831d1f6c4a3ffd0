// The choices: what was assumed, each as a sentence with its present effect, and a way to change it.

/** @import { Parts } from './store.js' */
/** @import { Visit } from './types.js' */
import { axisNames, orientationOf } from './picture-range.js';
import { influencesOf } from './visit.js';
import { outputUnit, percent } from './words.js';

/** @param {Parts} props */
export function Choices(props) {
  const { dispatch, state } = props;
  return (
    <section class="choices" aria-label="Choices">
      {choicesOf(props).map(({ name, title, effect }) => (
        <p key={name} class="choice-line">
          <strong>{title}</strong>
          <span>{effect} </span>
          <button
            type="button"
            class="change"
            aria-expanded={state.panel?.name === name}
            aria-label={`Change: ${title}`}
            onClick={() => dispatch({ type: 'panel', panel: { name } })}
          >
            change
          </button>
        </p>
      ))}
    </section>
  );
}

/**
 * @param {Parts} parts
 * @returns {{ name: string, title: string, effect: string }[]}
 */
function choicesOf({ core, state }) {
  const { visit, report } = state;
  const fit = report?.fit;
  const names = axisNames(visit);
  const coefficients = fit?.terms.length;
  const influences = influencesOf(visit);
  return [
    {
      name: 'shape',
      title: `Shape: ${fit?.formula ?? 'not fitted yet'}`,
      effect: fit
        ? `${coefficients} ${coefficients === 1 ? 'coefficient' : 'coefficients'} from ${fit.points_used} indications${influences.length > 0 ? `, drawn at the reference conditions` : ''}`
        : 'which curves are thought of',
    },
    { name: 'known', title: `Known before: ${knownTitle(visit)}`, effect: knownEffect(visit) },
    { name: 'noise', title: `Noise: ${noiseTitle(visit)}`, effect: noiseEffect(core, state) },
    {
      name: 'coverage',
      title: `Coverage: ${percent(report?.coverage ?? visit.coverage ?? 0.95)}`,
      effect: 'the probability that an interval holds what it is for',
    },
    {
      name: 'orientation',
      title: `Fitted: ${names.response} from ${names.argument}`,
      effect:
        orientationOf(visit) === 'indication_from_reference'
          ? 'read backwards to turn a reading into a value'
          : 'read forwards, as it stands',
    },
    {
      name: 'nominal',
      title: `Should show: ${nominalTitle(visit)}`,
      effect: visit.instrument?.output?.nominal ? 'errors are counted from it' : 'no error of indication without it',
    },
  ];
}

/** @param {Visit} visit */
function knownTitle(visit) {
  const kinds = (visit.model?.known_before ?? []).map((entry) => entry.kind).filter((kind) => kind !== 'flat');
  const words = /** @type {Record<string, string>} */ ({
    shrinkage: 'terms are likely small',
    coefficients: 'coefficients',
    values: 'values of the curve',
    conjugate: 'coefficients and noise together',
    carried: 'an earlier visit',
  });
  return kinds.length === 0 ? 'nothing used' : kinds.map((kind) => words[kind] ?? kind).join(' and ');
}

/** @param {Visit} visit */
function knownEffect(visit) {
  const flat = (visit.model?.known_before ?? []).every((entry) => entry.kind === 'flat');
  return flat ? 'the points alone speak; agrees with least squares' : 'the points and this together';
}

/** @param {Visit} visit */
function noiseTitle(visit) {
  const noise = visit.model?.noise;
  if (noise?.kind === 'known')
    return noise.standard_deviation === 0 ? 'each point its own' : `known, ${noise.standard_deviation ?? '?'} ${outputUnit(visit)}`.trim();
  return noise?.kind === 'stated' ? 'stated, with its own degrees of freedom' : 'unknown, one size';
}

/**
 * @param {Parts['core']} core
 * @param {Parts['state']} state
 */
function noiseEffect(core, { report }) {
  const noise = report?.fit?.noise;
  if (!noise) return 'the scatter of one indication';
  if (noise.estimate === null) return 'as stated at each point';
  const unit = report?.units.response ?? '';
  const size = `${core.format_number(noise.estimate, 2)} ${unit}`.trim();
  return noise.interval
    ? `${size} per indication (${core.format_interval(noise.interval[0], noise.interval[1], unit)})`
    : `${size} per indication`;
}

/** @param {Visit} visit */
function nominalTitle(visit) {
  const nominal = visit.instrument?.output?.nominal;
  const unit = outputUnit(visit);
  if (!nominal) return 'not stated';
  if (nominal.kind === 'identity') return 'the value itself';
  return `${nominal.range[0]} to ${nominal.range[1]} ${unit}, ${nominal.kind === 'linear' ? 'linear' : 'square root'}`;
}
