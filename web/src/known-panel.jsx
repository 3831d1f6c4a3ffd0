// What was known before the visit: nothing, coefficients with their uncertainty, or that terms are likely small.

/** @import { Parts } from './store.js' */
/** @import { KnownBefore, Term } from './types.js' */
import { Choice, NumberField } from './fields.jsx';
import { PanelFrame } from './panel.jsx';
import { withModel } from './visit.js';

/** @param {Parts & { onClose: () => void }} props */
export function KnownPanel({ core, state, dispatch, onClose }) {
  const { visit } = state;
  const known = (visit.model?.known_before ?? []).filter((entry) => entry.kind !== 'flat');
  const entry = known[0] ?? { kind: 'flat' };
  const others = known.slice(1);
  const set = (/** @type {KnownBefore} */ next, merge = /** @type {string|null} */ (null)) =>
    dispatch({ type: 'edit', visit: withModel(visit, { known_before: [next, ...others] }), what: 'what was known before', merge });
  const kinds = /** @type {Record<string, KnownBefore>} */ ({
    flat: { kind: 'flat' },
    coefficients: blankCoefficients(
      visit.model?.terms,
      state.report?.fit?.terms.map((term) => term.term),
    ),
    shrinkage: { kind: 'shrinkage', precision: 1, basis: 'standardised', intercept: 'flat' },
  });
  const listed = ['flat', 'coefficients', 'shrinkage'].includes(entry.kind);
  return (
    <PanelFrame title="What was known before" onClose={onClose} low>
      <Choice
        label="What was known before"
        hideLabel
        value={entry.kind}
        onChoose={(kind) => kind !== entry.kind && kinds[kind] && set(kinds[kind])}
        options={[
          { value: 'flat', label: 'Nothing', hint: 'The points alone speak. Results agree with least squares.' },
          {
            value: 'coefficients',
            label: 'Coefficients, with their standard uncertainty',
            hint: 'For instance a nominal offset and gain from a data sheet. Needs a known noise.',
          },
          {
            value: 'shrinkage',
            label: 'Terms are likely small',
            hint: 'Each coefficient is drawn towards zero with the precision given. Needs a known noise.',
          },
          ...(listed ? [] : [{ value: entry.kind, label: `As the visit states it (${entry.kind})`, hint: 'Kept as it is.' }]),
        ]}
      />
      {entry.kind === 'coefficients' && <Coefficients core={core} entry={entry} onChange={(next) => set(next)} />}
      {entry.kind === 'shrinkage' && <Shrinkage core={core} entry={entry} onChange={(next) => set(next)} />}
      {others.length > 0 && <p class="hint">The visit states {others.length} more of these; they are kept.</p>}
    </PanelFrame>
  );
}

/** @param {{ core: Parts['core'], entry: KnownBefore, onChange: (entry: KnownBefore) => void }} props */
function Coefficients({ core, entry, onChange }) {
  const mean = /** @type {(number|null)[]} */ (entry.mean ?? []);
  const names = /** @type {string[]} */ (entry.terms ?? mean.map((_, at) => `coefficient ${at + 1}`));
  const uncertainty = /** @type {(number|null)[]} */ (entry.standard_uncertainty ?? mean.map(() => null));
  const put = (/** @type {'mean'|'standard_uncertainty'} */ field, /** @type {number} */ at) => (/** @type {number|null} */ value) => {
    const list = field === 'mean' ? mean : uncertainty;
    onChange({ ...entry, mean, standard_uncertainty: uncertainty, [field]: list.map((old, index) => (index === at ? value : old)) });
  };
  if (entry.covariance) return <p class="hint">Coefficients with a full covariance, as the visit states them; they are kept.</p>;
  return (
    <div>
      {names.map((name, at) => (
        <div key={name} class="pair">
          <NumberField core={core} label={name === '1' ? 'Constant' : `Factor of ${name}`} value={mean[at]} onCommit={put('mean', at)} />
          <NumberField
            core={core}
            label="Its standard uncertainty"
            value={uncertainty[at]}
            onCommit={put('standard_uncertainty', at)}
            refuse={(value) => (value > 0 ? null : 'This is greater than zero; leave both empty where nothing is known.')}
          />
        </div>
      ))}
      <p class="hint">Both fields empty: nothing is known of this coefficient.</p>
    </div>
  );
}

/** @param {{ core: Parts['core'], entry: KnownBefore, onChange: (entry: KnownBefore) => void }} props */
function Shrinkage({ core, entry, onChange }) {
  return (
    <div>
      {typeof entry.precision === 'string' && (
        <p class="hint">The precision is to be found from the points (“{entry.precision}”); a number here replaces that.</p>
      )}
      <NumberField
        core={core}
        label="Precision: one over the variance of a coefficient"
        value={typeof entry.precision === 'number' ? entry.precision : null}
        onCommit={(value) => value !== null && onChange({ ...entry, precision: value })}
        refuse={(value) => (value > 0 ? null : 'A precision is greater than zero.')}
      />
      <Choice
        label="Acts on"
        value={entry.basis ?? 'standardised'}
        onChoose={(basis) => onChange({ ...entry, basis })}
        options={[
          { value: 'standardised', label: 'terms brought to mean 0 and standard deviation 1 over the points' },
          { value: 'as_given', label: 'terms as they are written' },
        ]}
      />
      <Choice
        label="The constant"
        value={entry.intercept ?? 'flat'}
        onChoose={(intercept) => onChange({ ...entry, intercept })}
        options={[
          { value: 'flat', label: 'is left free' },
          { value: 'shrunk', label: 'is drawn to zero too' },
        ]}
      />
    </div>
  );
}

/**
 * @param {Term[]|Term|undefined} terms
 * @param {string[]|undefined} fitted
 * @returns {KnownBefore}
 */
function blankCoefficients(terms, fitted) {
  const listed = (Array.isArray(terms) ? terms : []).filter((term) => typeof term === 'string');
  const names = listed.length > 0 ? listed : (fitted ?? []);
  return { kind: 'coefficients', terms: names, mean: names.map(() => null), standard_uncertainty: names.map(() => null) };
}
