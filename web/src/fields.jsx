// Fields of the forms: a label above an input; a number says what is wrong with it below.

/** @import { Core } from './types.js' */
import { useId, useState } from 'preact/hooks';
import { readPieces } from './cells.js';

/**
 * A text, handed on when the field is left.
 * @param {{ label: string, value: string, onCommit: (text: string) => void, hint?: string, type?: 'text'|'date', rows?: number, list?: string[] }} props
 */
export function TextField({ label, value, onCommit, hint, type = 'text', rows, list }) {
  const id = useId();
  const [draft, setDraft] = useState(/** @type {string|null} */ (null));
  const commit = () => {
    if (draft !== null && draft !== value) onCommit(draft);
    setDraft(null);
  };
  const shared = {
    id,
    value: draft ?? value,
    'aria-describedby': hint ? `${id}-hint` : undefined,
    onBlur: commit,
    onInput: (/** @type {any} */ event) => setDraft(event.currentTarget.value),
  };
  return (
    <div class="field">
      <label for={id}>{label}</label>
      {rows ? (
        <textarea rows={rows} spellcheck={false} {...shared} />
      ) : (
        <input
          type={type}
          list={list && `${id}-list`}
          autocomplete="off"
          onKeyDown={(event) => event.key === 'Enter' && commit()}
          {...shared}
        />
      )}
      {list && (
        <datalist id={`${id}-list`}>
          {list.map((entry) => (
            <option key={entry} value={entry} />
          ))}
        </datalist>
      )}
      {hint && (
        <p class="hint" id={`${id}-hint`}>
          {hint}
        </p>
      )}
    </div>
  );
}

/**
 * A number; an empty field is `null`. What cannot be read stays in the field with the reason, and nothing else changes.
 * @param {{ core: Core, label: string, value: number|null|undefined, onCommit: (value: number|null) => void, unit?: string, hint?: string, refuse?: (value: number) => string|null }} props
 */
export function NumberField({ core, label, value, onCommit, unit, hint, refuse }) {
  const id = useId();
  const [draft, setDraft] = useState(/** @type {string|null} */ (null));
  const shown = draft ?? (value === null || value === undefined ? '' : String(value));
  const pieces = readPieces(core, shown);
  const single = pieces.values?.length === 1 ? pieces.values[0] : null;
  const several = pieces.values && pieces.values.length > 1 ? 'One number is needed here.' : null;
  const sentence = draft === null ? null : (pieces.sentence ?? several ?? (single === null ? null : (refuse?.(single) ?? null)));
  const commit = () => {
    if (draft === null || sentence || pieces.alternatives) return;
    if (single !== (value ?? null)) onCommit(single);
    setDraft(null);
  };
  const choose = (/** @type {number} */ choice) => {
    onCommit(choice);
    setDraft(null);
  };
  return (
    <div class="field">
      <label for={id}>{unit ? `${label} / ${unit}` : label}</label>
      <input
        id={id}
        class="number"
        inputmode="decimal"
        autocomplete="off"
        value={shown}
        aria-invalid={sentence ? 'true' : undefined}
        aria-describedby={`${id}-hint`}
        onInput={(event) => setDraft(event.currentTarget.value)}
        onBlur={commit}
        onKeyDown={(event) => event.key === 'Enter' && commit()}
      />
      <div id={`${id}-hint`}>
        {sentence && <p class="trouble">{sentence}</p>}
        {draft !== null && pieces.alternatives && (
          <TwoWays text={shown} alternatives={pieces.alternatives} onChoose={(choice) => choose(choice[0])} />
        )}
        {hint && !sentence && <p class="hint">{hint}</p>}
      </div>
    </div>
  );
}

/**
 * A text that reads in two ways: the person says which.
 * @param {{ text: string, alternatives: number[][], onChoose: (values: number[], choice: number) => void }} props
 */
export function TwoWays({ text, alternatives, onChoose }) {
  return (
    <span class="two-ways">
      “{text}” can be read as
      {alternatives.map((values, choice) => (
        <button
          key={values.join()}
          type="button"
          class="small"
          onMouseDown={(event) => event.preventDefault()}
          onClick={() => onChoose(values, choice)}
        >
          {values.map(String).join('; ')}
        </button>
      ))}
    </span>
  );
}

/**
 * One of several, each with a sentence.
 * @param {{ label: string, value: string, options: { value: string, label: string, hint?: string }[], onChoose: (value: string) => void, hideLabel?: boolean }} props
 */
export function Choice({ label, value, options, onChoose, hideLabel }) {
  const name = useId();
  return (
    <fieldset class="choice">
      <legend class={hideLabel ? 'unseen' : undefined}>{label}</legend>
      {options.map((option) => (
        <label key={option.value} class="option">
          <input type="radio" name={name} checked={option.value === value} onChange={() => onChoose(option.value)} />
          <span>
            {option.label}
            {option.hint && <small>{option.hint}</small>}
          </span>
        </label>
      ))}
    </fieldset>
  );
}
