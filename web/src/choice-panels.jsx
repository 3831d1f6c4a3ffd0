// The panels behind the small choices: coverage, orientation, nominal characteristic.

/** @import { Parts } from './store.js' */
/** @import { Nominal, Orientation } from './types.js' */
import { Choice, NumberField } from './fields.jsx';
import { PanelFrame } from './panel.jsx';
import { orientationOf } from './picture-range.js';
import { withModel, withOutput } from './visit.js';
import { outputUnit } from './words.js';

/** @typedef {Parts & { onClose: () => void }} PanelProps */

/** @param {PanelProps} props */
export function CoveragePanel({ core, state, dispatch, onClose }) {
  const { visit } = state;
  const coverage = visit.coverage ?? 0.95;
  const set = (/** @type {number} */ value) =>
    dispatch({ type: 'edit', visit: { ...visit, coverage: value }, what: 'coverage', merge: 'coverage' });
  return (
    <PanelFrame title="Coverage" onClose={onClose} low>
      <p>Every interval on this sheet holds the quantity it is for with this probability.</p>
      <div class="buttons">
        {[0.9, 0.95, 0.99].map((value) => (
          <button key={value} type="button" aria-pressed={coverage === value} onClick={() => set(value)}>
            {value * 100} %
          </button>
        ))}
      </div>
      <NumberField
        core={core}
        label="Other probability"
        value={coverage}
        onCommit={(value) => set(value ?? 0.95)}
        hint="Between 0 and 1, for instance 0.9545."
        refuse={(value) => (value > 0 && value < 1 ? null : 'A probability lies between 0 and 1.')}
      />
    </PanelFrame>
  );
}

/** @param {PanelProps} props */
export function OrientationPanel({ state, dispatch, onClose }) {
  const { visit } = state;
  const orientation = orientationOf(visit);
  const choose = (/** @type {string} */ value) => {
    const other = /** @type {Orientation} */ (value);
    dispatch({
      type: 'edit',
      visit: withModel(visit, { orientation: other, terms: renamed(visit.model?.terms, orientation, other) }),
      what: 'which is fitted from which',
    });
  };
  return (
    <PanelFrame title="Which is fitted from which" onClose={onClose} low>
      <Choice
        label="Which is fitted from which"
        hideLabel
        value={orientation}
        onChoose={choose}
        options={[
          {
            value: 'indication_from_reference',
            label: 'Indication from reference value',
            hint: 'The reference values are exact beside the scatter of the instrument. A reading is turned into a value by reading the curve backwards.',
          },
          {
            value: 'reference_from_indication',
            label: 'Reference value from indication',
            hint: 'Classical practice for loading an instrument with its curve: read forwards.',
          },
          {
            value: 'correction_from_indication',
            label: 'Correction from indication',
            hint: 'Reference value minus indication, fitted against the indication; both have the same unit.',
          },
        ]}
      />
      <p class="hint">
        The terms of the shape are written in x (reference value) for the first and in y (indication) for the others; simple ones are
        rewritten by themselves.
      </p>
    </PanelFrame>
  );
}

/** @param {PanelProps} props */
export function NominalPanel({ core, state, dispatch, onClose }) {
  const { visit } = state;
  const nominal = visit.instrument?.output?.nominal ?? null;
  const range = nominal && nominal.kind !== 'identity' ? nominal.range : /** @type {[number, number]} */ ([4, 20]);
  const set = (/** @type {Nominal|null} */ next) =>
    dispatch({ type: 'edit', visit: withOutput(visit, { nominal: next }), what: 'what the instrument should show' });
  const kinds = /** @type {Record<string, Nominal|null>} */ ({
    none: null,
    identity: { kind: 'identity' },
    linear: { kind: 'linear', range },
    square_root: { kind: 'square_root', range },
  });
  const end = (/** @type {0|1} */ which) => (/** @type {number|null} */ value) => {
    if (value === null || !nominal || nominal.kind === 'identity') return;
    set({ ...nominal, range: which === 0 ? [value, nominal.range[1]] : [nominal.range[0], value] });
  };
  return (
    <PanelFrame title="What the instrument should show" onClose={onClose} low>
      <Choice
        label="Nominal characteristic"
        hideLabel
        value={nominal?.kind ?? 'none'}
        onChoose={(kind) => set(kinds[kind])}
        options={[
          { value: 'identity', label: 'The value itself', hint: 'Indication and value have the same unit.' },
          { value: 'linear', label: 'A straight line', hint: 'For instance 4 to 20 mA over the range of the instrument.' },
          { value: 'square_root', label: 'The square root', hint: 'For instance a differential pressure that stands for a flow.' },
          { value: 'none', label: 'Not stated', hint: 'Then there is no error of indication and no error view.' },
        ]}
      />
      {nominal && nominal.kind !== 'identity' && (
        <div class="pair">
          <NumberField
            core={core}
            label="Output at the start of the range"
            unit={outputUnit(visit)}
            value={nominal.range[0]}
            onCommit={end(0)}
          />
          <NumberField core={core} label="Output at its end" unit={outputUnit(visit)} value={nominal.range[1]} onCommit={end(1)} />
        </div>
      )}
      {nominal && nominal.kind !== 'identity' && !visit.instrument?.range && (
        <p class="trouble">The range of the instrument is not stated yet: write it in the heading (change).</p>
      )}
    </PanelFrame>
  );
}

/**
 * Terms with their variable renamed, where the new orientation writes them in another letter.
 * @param {NonNullable<Parts['state']['visit']['model']>['terms']} terms
 * @param {Orientation} from
 * @param {Orientation} to
 */
function renamed(terms, from, to) {
  const [old, letter] = [from, to].map((orientation) => (orientation === 'indication_from_reference' ? 'x' : 'y'));
  if (old === letter || !Array.isArray(terms)) return terms;
  return terms.map((term) =>
    typeof term === 'string' ? term.replace(new RegExp(`(?<![\\p{L}\\p{N}_])${old}(?![\\p{L}\\p{N}_])`, 'gu'), letter) : term,
  );
}
