// One point in full: set aside with a reason, state, repeats, uncertainties, note.

/** @import { Parts } from './store.js' */
/** @import { Point } from './types.js' */
import { useState } from 'preact/hooks';
import { Choice, NumberField, TextField } from './fields.jsx';
import { PanelFrame } from './panel.jsx';
import { pointsOf, valueText, withoutPoint, withPoint } from './visit.js';
import { outputUnit } from './words.js';

/** @param {Parts & { index: number, onClose: () => void }} props */
export function PointPanel({ core, store, state, dispatch, index, onClose }) {
  const { visit, entering } = state;
  const point = pointsOf(visit)[index];
  if (!point) return null;
  const unit = visit.instrument?.unit ?? '';
  const edit = (/** @type {Partial<Point>} */ change, /** @type {string} */ what) =>
    dispatch({ type: 'edit', visit: withPoint(store.state().visit, index, change, entering), what: `row ${index + 1}: ${what}` });
  const remove = () => {
    onClose();
    dispatch({ type: 'edit', visit: withoutPoint(visit, index), what: `row ${index + 1} deleted` });
  };
  return (
    <PanelFrame title={`Row ${index + 1}`} onClose={onClose} low>
      <p class="lead">{summary(visit, point)}</p>
      <SetAside point={point} onChange={(reason) => edit({ set_aside: reason }, reason === null ? 'used again' : 'set aside')} />
      <Choice
        label="State"
        value={point.state ?? 'as_found'}
        onChoose={(value) => edit({ state: /** @type {Point['state']} */ (value) }, 'state')}
        options={[
          { value: 'as_found', label: 'as found' },
          { value: 'as_left', label: 'as left' },
        ]}
      />
      <TextField label="Note" value={point.note ?? ''} onCommit={(note) => edit({ note }, 'note')} />
      <details>
        <summary>Uncertainties and repeats of this row</summary>
        {!Array.isArray(point.indication) && (
          <NumberField
            core={core}
            label="The indication is the mean of"
            value={point.repeats}
            onCommit={(repeats) => edit({ repeats }, 'repeats')}
            hint="Only where the single indications are not known; otherwise type them as 151; 150; 151."
            refuse={wholeNumber}
          />
        )}
        <NumberField
          core={core}
          label="Standard uncertainty of the indication"
          unit={outputUnit(visit)}
          value={point.indication_uncertainty}
          onCommit={(value) => edit({ indication_uncertainty: value }, 'uncertainty of the indication')}
          refuse={notNegative}
        />
        <NumberField
          core={core}
          label="Standard uncertainty of the reference value, its own"
          unit={unit}
          value={point.reference_uncertainty}
          onCommit={(value) => edit({ reference_uncertainty: value }, 'uncertainty of the reference value')}
          refuse={notNegative}
        />
        <TextField
          label="Setting of the standard"
          value={point.setting ?? ''}
          onCommit={(text) => edit({ setting: text || null }, 'setting')}
          hint="Rows of one setting share its error; without a name the same reference value is one setting."
        />
        <NumberField
          core={core}
          label="Standard uncertainty of that setting"
          unit={unit}
          value={point.setting_uncertainty}
          onCommit={(value) => edit({ setting_uncertainty: value }, 'uncertainty of the setting')}
          refuse={notNegative}
        />
      </details>
      <button type="button" class="danger" onClick={remove}>
        Delete this row
      </button>
      <p class="hint">A row that was measured and looks wrong is better set aside with its reason: it stays in the record.</p>
    </PanelFrame>
  );
}

/** @param {{ point: Point, onChange: (reason: string|null) => void }} props */
function SetAside({ point, onChange }) {
  const [reason, setReason] = useState('');
  const aside = point.set_aside ?? null;
  if (aside !== null) {
    return (
      <div class="field">
        <p>Set aside: {aside}. It is drawn hollow and is not in the fit.</p>
        <button type="button" onClick={() => onChange(null)}>
          Use this row again
        </button>
      </div>
    );
  }
  const ready = reason.trim() !== '';
  return (
    <form
      class="field"
      onSubmit={(event) => {
        event.preventDefault();
        if (ready) onChange(reason.trim());
      }}
    >
      <label for="aside-reason">Set aside, because</label>
      <div class="with-button">
        <input id="aside-reason" value={reason} autocomplete="off" onInput={(event) => setReason(event.currentTarget.value)} />
        <button type="submit" disabled={!ready}>
          Set aside
        </button>
      </div>
    </form>
  );
}

/** @param {number} value */
export function notNegative(value) {
  return value < 0 ? 'An uncertainty is not negative.' : null;
}

/** @param {number} value */
function wholeNumber(value) {
  return value >= 1 && Number.isInteger(value) ? null : 'A number of repeats is a whole number from 1 upward.';
}

/**
 * @param {Parts['state']['visit']} visit
 * @param {Point} point
 */
function summary(visit, point) {
  const unit = visit.instrument?.unit ?? '';
  return `Reference ${valueText(point.reference) || 'not read'} ${unit}, indication ${valueText(point.indication) || 'not read'} ${outputUnit(visit)}`;
}
