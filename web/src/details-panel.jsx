// Instrument, standard and occasion: what a leaf must say to be of use next year.

/** @import { Parts } from './store.js' */
/** @import { PointState, Visit } from './types.js' */
import { useState } from 'preact/hooks';
import { Choice, NumberField, TextField } from './fields.jsx';
import { PanelFrame } from './panel.jsx';
import { notNegative } from './point-panel.jsx';
import {
  influencesOf,
  pointsOf,
  withEveryPoint,
  withInfluence,
  withInstrument,
  withOccasion,
  withOutput,
  withoutInfluence,
  withStandard,
} from './visit.js';

/** @param {Parts & { onClose: () => void }} props */
export function DetailsPanel({ core, store, state, dispatch, onClose }) {
  const { visit } = state;
  const instrument = visit.instrument ?? {};
  const output = instrument.output ?? {};
  const range = instrument.range ?? null;
  const edit = (/** @type {string} */ what) => (/** @type {(visit: Visit) => Visit} */ change) =>
    dispatch({ type: 'edit', visit: change(store.state().visit), what });
  const text = (/** @type {'name'|'serial'|'place'|'quantity'|'unit'} */ field, /** @type {string} */ label, hint = '') => (
    <TextField
      label={label}
      hint={hint}
      value={instrument[field] ?? ''}
      onCommit={(value) => edit(label.toLowerCase())((now) => withInstrument(now, { [field]: value.trim() }))}
    />
  );
  return (
    <PanelFrame title="Instrument and occasion" onClose={onClose}>
      {text('name', 'Instrument')}
      <div class="pair">
        {text('place', 'Place')}
        {text('serial', 'Serial number')}
      </div>
      <div class="pair">
        <NumberField
          core={core}
          label="Cannot be below"
          unit={instrument.unit}
          value={instrument.hard_limits?.[0]}
          onCommit={(value) => edit('lower limit of what can occur')((now) => withHardLimit(now, 0, value))}
          hint="for instance 0 for a level"
        />
        <NumberField
          core={core}
          label="Cannot be above"
          unit={instrument.unit}
          value={instrument.hard_limits?.[1]}
          onCommit={(value) => edit('upper limit of what can occur')((now) => withHardLimit(now, 1, value))}
        />
      </div>
      <div class="pair">
        {text('quantity', 'Quantity', 'for instance level')}
        {text('unit', 'Unit', 'of value and reference')}
      </div>
      <Range
        core={core}
        range={range}
        unit={instrument.unit ?? ''}
        onChange={(next) => edit('range')((now) => withInstrument(now, { range: next }))}
      />
      <div class="pair">
        <TextField
          label="Unit shown, if another"
          value={output.unit ?? ''}
          hint="for instance mA"
          onCommit={(value) => edit('unit shown')((now) => withOutput(now, { unit: value.trim() || null }))}
        />
        <NumberField
          core={core}
          label="Least digit shown"
          unit={output.unit || instrument.unit}
          value={output.resolution}
          onCommit={(value) => edit('least digit')((now) => withOutput(now, { resolution: value }))}
          refuse={notNegative}
        />
      </div>
      <h3>Occasion</h3>
      <div class="pair">
        <TextField
          label="Date"
          type="date"
          value={visit.occasion?.date ?? ''}
          onCommit={(value) => edit('date')((now) => withOccasion(now, { date: value || null }))}
        />
        <TextField
          label="By"
          value={visit.occasion?.by ?? ''}
          onCommit={(value) => edit('who')((now) => withOccasion(now, { by: value.trim() }))}
        />
      </div>
      {pointsOf(visit).length > 0 && (
        <Choice
          label="Every row is"
          value={commonState(visit)}
          onChoose={(value) => edit('state of every row')((now) => withEveryPoint(now, { state: /** @type {PointState} */ (value) }))}
          options={[
            { value: 'as_found', label: 'as found' },
            { value: 'as_left', label: 'as left' },
          ]}
        />
      )}
      <TextField
        label="Notes"
        rows={3}
        value={visit.occasion?.notes ?? ''}
        onCommit={(value) => edit('notes')((now) => withOccasion(now, { notes: value }))}
      />
      <StandardFields {...{ core, store, state, dispatch }} />
      <Influences {...{ core, store, state, dispatch }} />
    </PanelFrame>
  );
}

/** @param {{ core: Parts['core'], range: [number, number]|null, unit: string, onChange: (range: [number, number]|null) => void }} props */
function Range({ core, range, unit, onChange }) {
  const [half, setHalf] = useState(/** @type {[number|null, number|null]} */ ([null, null]));
  const put = (/** @type {0|1} */ which) => (/** @type {number|null} */ value) => {
    const ends = /** @type {[number|null, number|null]} */ (range ? [...range] : [...half]);
    ends[which] = value;
    setHalf(ends);
    if (ends[0] !== null && ends[1] !== null) onChange([ends[0], ends[1]]);
    else if (range) onChange(null);
  };
  const ends = range ?? half;
  const order = (/** @type {number|null} */ low, /** @type {number|null} */ high) =>
    low !== null && high !== null && low >= high ? 'The range starts below its end.' : null;
  return (
    <div class="pair">
      <NumberField core={core} label="Range from" unit={unit} value={ends[0]} onCommit={put(0)} refuse={(value) => order(value, ends[1])} />
      <NumberField core={core} label="to" unit={unit} value={ends[1]} onCommit={put(1)} refuse={(value) => order(ends[0], value)} />
    </div>
  );
}

/** @param {Parts} props */
function StandardFields({ core, store, state, dispatch }) {
  const { visit } = state;
  const [standard, ...others] = visit.standards ?? [];
  const unit = visit.instrument?.unit ?? '';
  const edit = (/** @type {string} */ what) => (/** @type {(visit: Visit) => Visit} */ change) =>
    dispatch({ type: 'edit', visit: change(store.state().visit), what });
  const errorOf = (/** @type {string} */ kind) => standard?.errors?.find((error) => error.kind === kind)?.standard_uncertainty ?? null;
  const setError = (/** @type {string} */ kind) => (/** @type {number|null} */ value) =>
    edit('uncertainty of the standard')((now) => {
      const rest = (now.standards?.[0]?.errors ?? []).filter((error) => error.kind !== kind);
      return withStandard(now, { errors: value === null ? rest : [...rest, { kind, standard_uncertainty: value, source: 'certificate' }] });
    });
  const settings = pointsOf(visit).map((point) => point.setting_uncertainty ?? null);
  const common = settings.length > 0 && settings.every((value) => value === settings[0]) ? settings[0] : null;
  return (
    <>
      <h3>Measurement standard</h3>
      <TextField
        label="Name"
        value={standard?.name ?? ''}
        onCommit={(value) => edit('standard')((now) => withStandard(now, { name: value.trim() }))}
      />
      <div class="pair">
        <TextField
          label="Certificate"
          value={standard?.certificate ?? ''}
          onCommit={(value) => edit('certificate')((now) => withStandard(now, { certificate: value.trim() }))}
        />
        <TextField
          label="Due"
          type="date"
          value={standard?.due ?? ''}
          onCommit={(value) => edit('due date of the standard')((now) => withStandard(now, { due: value || null }))}
        />
      </div>
      <div class="pair">
        <NumberField
          core={core}
          label="Common offset, standard uncertainty"
          unit={unit}
          value={errorOf('offset')}
          onCommit={setError('offset')}
          refuse={notNegative}
        />
        <NumberField
          core={core}
          label="Common gain, standard uncertainty"
          value={errorOf('gain')}
          onCommit={setError('gain')}
          hint="a share: 1e-5"
          refuse={notNegative}
        />
      </div>
      {settings.length > 0 && (
        <NumberField
          core={core}
          label="Each setting, standard uncertainty, for every row"
          unit={unit}
          value={common}
          onCommit={(value) => edit('uncertainty of the settings')((now) => withEveryPoint(now, { setting_uncertainty: value }))}
          refuse={notNegative}
          hint={
            common === null && settings.some((value) => value !== null)
              ? 'The rows have different ones; a number here replaces them.'
              : undefined
          }
        />
      )}
      {others.length > 0 && (
        <p class="hint">
          The visit has {others.length} more {others.length === 1 ? 'standard' : 'standards'}:{' '}
          {others.map((other) => other.name || other.id).join(', ')}.
        </p>
      )}
    </>
  );
}

/** @param {Parts} props */
function Influences({ core, store, state, dispatch }) {
  const { visit } = state;
  const [name, setName] = useState('');
  const [unit, setUnit] = useState('');
  const plain = name.trim();
  const usable = /^[\p{L}_][\p{L}\p{N}_]*$/u.test(plain) && !['x', 'y', 'pi', 'e'].includes(plain) && !influencesOf(visit).includes(plain);
  const add = () => {
    dispatch({ type: 'edit', visit: withInfluence(store.state().visit, plain, unit.trim()), what: `influence ${plain}` });
    setName('');
    setUnit('');
  };
  return (
    <>
      <h3>Influence quantities</h3>
      {influencesOf(visit).map((influence) => (
        <div key={influence} class="pair">
          <NumberField
            core={core}
            label={`${influence}, reference condition`}
            unit={visit.instrument?.influences?.[influence]?.unit}
            value={visit.conditions?.[influence]}
            onCommit={(value) =>
              dispatch({
                type: 'edit',
                visit: { ...visit, conditions: conditionsWith(visit, influence, value) },
                what: `condition of ${influence}`,
              })
            }
          />
          <button
            type="button"
            class="small"
            onClick={() => dispatch({ type: 'edit', visit: withoutInfluence(visit, influence), what: `influence ${influence} removed` })}
          >
            Remove {influence}
          </button>
        </div>
      ))}
      <form
        class="pair"
        onSubmit={(event) => {
          event.preventDefault();
          if (usable) add();
        }}
      >
        <div class="field">
          <label for="new-influence">New one, for instance temperature</label>
          <input id="new-influence" value={name} autocomplete="off" onInput={(event) => setName(event.currentTarget.value)} />
        </div>
        <div class="field">
          <label for="new-influence-unit">Its unit</label>
          <input id="new-influence-unit" value={unit} autocomplete="off" onInput={(event) => setUnit(event.currentTarget.value)} />
        </div>
        <button type="submit" class="small" disabled={!usable}>
          Add a column
        </button>
      </form>
      {plain !== '' && !usable && (
        <p class="trouble">A name is one word of letters, digits and underscores, not x or y, and not one that is there.</p>
      )}
    </>
  );
}

/**
 * The state of all rows; empty where there are both.
 * @param {Visit} visit
 */
function commonState(visit) {
  const states = new Set(pointsOf(visit).map((point) => point.state ?? 'as_found'));
  return states.size === 1 ? [...states][0] : '';
}

/**
 * @param {Visit} visit
 * @param {0|1} end
 * @param {number|null} value
 */
function withHardLimit(visit, end, value) {
  const [below, above] = visit.instrument?.hard_limits ?? [null, null];
  const limits = /** @type {[number|null, number|null]} */ (end === 0 ? [value, above] : [below, value]);
  return withInstrument(visit, { hard_limits: limits[0] === null && limits[1] === null ? null : limits });
}

/**
 * @param {Visit} visit
 * @param {string} name
 * @param {number|null} value
 */
function conditionsWith(visit, name, value) {
  const { [name]: _, ...others } = visit.conditions ?? {};
  return value === null ? others : { ...others, [name]: value };
}
