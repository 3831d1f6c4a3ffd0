// The noise: how much one indication scatters, and who knows it.

/** @import { Parts } from './store.js' */
/** @import { Noise } from './types.js' */
import { Choice, NumberField } from './fields.jsx';
import { PanelFrame } from './panel.jsx';
import { orientationOf } from './picture-range.js';
import { pointsOf, withModel } from './visit.js';
import { outputUnit } from './words.js';

/** @param {Parts & { onClose: () => void }} props */
export function NoisePanel({ core, state, dispatch, onClose }) {
  const { visit } = state;
  const noise = visit.model?.noise ?? { kind: 'unknown' };
  const unit =
    state.report?.units.response ||
    (orientationOf(visit) === 'indication_from_reference' ? outputUnit(visit) : (visit.instrument?.unit ?? ''));
  const perPoint = noise.kind === 'known' && noise.standard_deviation === 0;
  const set = (/** @type {Noise} */ next) =>
    dispatch({
      type: 'edit',
      visit: withModel(visit, { noise: { ...next, ...(noise.profile ? { profile: noise.profile } : {}) } }),
      what: 'noise',
    });
  const size = noise.standard_deviation || firstGuess(state);
  const kinds = /** @type {Record<string, Noise>} */ ({
    unknown: { kind: 'unknown' },
    known: { kind: 'known', standard_deviation: size },
    stated: { kind: 'stated', standard_deviation: size, degrees_of_freedom: noise.degrees_of_freedom ?? 10 },
    own: { kind: 'known', standard_deviation: 0 },
  });
  const without = pointsOf(visit).filter((point) => typeof point.indication_uncertainty !== 'number').length;
  return (
    <PanelFrame title="Noise" onClose={onClose} low>
      <p>How much a single indication scatters about the curve, as a standard deviation.</p>
      <Choice
        label="Noise"
        hideLabel
        value={perPoint ? 'own' : noise.kind}
        onChoose={(kind) => set(kinds[kind])}
        options={[
          {
            value: 'unknown',
            label: 'Unknown, one size',
            hint: 'The points themselves tell it: results agree with least squares and Student’s t.',
          },
          { value: 'known', label: 'Known', hint: 'A repeatability that is well established.' },
          {
            value: 'stated',
            label: 'Stated, with degrees of freedom',
            hint: 'A repeatability from so many earlier measurements; the points add to it.',
          },
          { value: 'own', label: 'Each point its own', hint: 'Every row states a standard uncertainty; they are the whole noise.' },
        ]}
      />
      {(noise.kind === 'known' || noise.kind === 'stated') && !perPoint && (
        <NumberField
          core={core}
          label="Standard deviation of one indication"
          unit={unit}
          value={noise.standard_deviation}
          onCommit={(value) => value !== null && set({ ...noise, standard_deviation: value })}
          refuse={positive}
        />
      )}
      {noise.kind === 'stated' && (
        <NumberField
          core={core}
          label="Its degrees of freedom"
          value={noise.degrees_of_freedom}
          onCommit={(value) => value !== null && set({ ...noise, degrees_of_freedom: value })}
          refuse={positive}
        />
      )}
      {perPoint && (
        <p class={without > 0 ? 'trouble' : 'hint'}>
          {without > 0
            ? `${without} of the rows have no standard uncertainty yet: write it in the column u of the points.`
            : 'Every row has its standard uncertainty, in the column u.'}
        </p>
      )}
    </PanelFrame>
  );
}

/** @param {number} value */
function positive(value) {
  return value > 0 ? null : 'This is greater than zero.';
}

/**
 * The scatter of the present fit, to start from.
 * @param {Parts['state']} state
 */
function firstGuess(state) {
  return state.report?.fit?.noise.estimate ?? 1;
}
