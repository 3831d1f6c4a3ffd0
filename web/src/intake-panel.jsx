// What was read from a text or a file, and what only a person can say about it: which column is which, comma or point.

/** @import { Parts } from './store.js' */
/** @import { Column, Intake, Panel } from './types.js' */
import { useMemo, useState } from 'preact/hooks';
import { addIntake, readIntake } from './commands.js';
import { Choice } from './fields.jsx';
import { PanelFrame } from './panel.jsx';
import { refusal } from './store.js';
import { influencesOf, pointsOf } from './visit.js';

const PREVIEW = 8;

/** @param {Parts & { intake: NonNullable<Panel['intake']>, onClose: () => void }} props */
export function IntakePanel({ core, store, state, intake, onClose }) {
  const known = { influence_names: influencesOf(state.visit) };
  const [options, setOptions] = useState(/** @type {Record<string, any>} */ (known));
  const { read, sentence } = useMemo(() => attempt(() => readIntake(core, intake, options)), [intake, options]);
  const held = pointsOf(state.visit).length;
  if (!read)
    return (
      <PanelFrame title="Points from outside" onClose={onClose}>
        <p class="trouble">{sentence}</p>
      </PanelFrame>
    );
  const count = read.points.length;
  const add = (/** @type {boolean} */ replace) => {
    onClose();
    addIntake(store, read, replace, intake.source);
  };
  return (
    <PanelFrame title={`Points from ${intake.source}`} onClose={onClose} wide>
      <Preview intake={read} />
      <Columns intake={read} onChange={(columns) => setOptions({ ...options, columns: { ...options.columns, ...columns } })} />
      {read.questions.map((question) => (
        <Choice
          key={question.code + question.column}
          label={question.sentence}
          value=""
          options={question.choices.map((choice, at) => ({ value: String(at), label: choice.label }))}
          onChoose={(at) => setOptions(question.choices[Number(at)].option)}
        />
      ))}
      {read.questions.length === 0 && read.problems.length > 0 && (
        <section aria-label="Not read">
          <h3>Not read</h3>
          <ul class="plain">
            {read.problems.slice(0, 200).map((problem) => (
              <li key={problem.place + problem.sentence}>{problem.sentence}</li>
            ))}
          </ul>
          {read.problems.length > 200 && <p class="hint">and {read.problems.length - 200} more.</p>}
        </section>
      )}
      {read.questions.length > 0 && <p class="hint">Answer what is asked above; nothing is added before.</p>}
      <div class="buttons">
        {count > 0 && (
          <button type="button" class="primary" onClick={() => add(false)}>
            {held > 0 ? `Add ${count} behind the ${held} rows` : `Add ${count} ${count === 1 ? 'row' : 'rows'}`}
          </button>
        )}
        {count > 0 && held > 0 && (
          <button type="button" onClick={() => add(true)}>
            Put {count} in their place
          </button>
        )}
        {Object.keys(options).length > 1 && (
          <button type="button" onClick={() => setOptions(known)}>
            Ask again
          </button>
        )}
      </div>
    </PanelFrame>
  );
}

/** @param {{ intake: Intake }} props */
function Preview({ intake }) {
  return (
    <div class="scroll" tabIndex={0} role="region" aria-label="First rows as they were read">
      <table class="figures">
        <thead>
          <tr>
            {intake.columns.map((column) => (
              <th key={column.index} scope="col">
                {columnName(column)}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {intake.rows.slice(0, PREVIEW).map((row, at) => (
            <tr key={at}>
              {row.map((cell, index) => (
                <td key={index}>{cell}</td>
              ))}
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}

/** @param {{ intake: Intake, onChange: (columns: Record<string, number>) => void }} props */
function Columns({ intake, onChange }) {
  const at = (/** @type {'reference'|'indication'} */ role) => intake.columns.find((column) => column.role === role)?.index;
  const choose = (/** @type {'reference'|'indication'} */ role) => (/** @type {any} */ event) => {
    onChange({ [role]: Number(event.currentTarget.value) });
  };
  return (
    <div class="pair">
      {
        /** @type {const} */ (['reference', 'indication']).map((role) => (
          <label key={role}>
            {role === 'reference' ? 'Reference value is in' : 'Indication is in'}
            <select value={at(role) ?? ''} onChange={choose(role)}>
              <option value="" disabled>
                choose a column
              </option>
              {intake.columns.map((column) => (
                <option key={column.index} value={column.index}>
                  {columnName(column)}
                </option>
              ))}
            </select>
          </label>
        ))
      }
    </div>
  );
}

/** @param {Column} column */
function columnName(column) {
  const name = column.name || `column ${column.index + 1}`;
  return column.unit ? `${name} / ${column.unit}` : name;
}

/**
 * @param {() => Intake} action
 * @returns {{ read: Intake, sentence: null } | { read: null, sentence: string }}
 */
function attempt(action) {
  try {
    return { read: action(), sentence: null };
  } catch (problem) {
    return { read: null, sentence: refusal(problem).sentence };
  }
}
