// The shape: a polynomial at a click, or any list of terms, refused with the place of what is wrong.

/** @import { Parts } from './store.js' */
/** @import { Problem, Term, Visit } from './types.js' */
import { useState } from 'preact/hooks';
import { PanelFrame } from './panel.jsx';
import { orientationOf } from './picture-range.js';
import { refusal } from './store.js';
import { influencesOf, withModel } from './visit.js';

const NAMES = ['a constant', 'straight line', 'quadratic', 'cubic', 'degree 4', 'degree 5'];

/** @param {Parts & { onClose: () => void }} props */
export function ShapePanel({ core, state, dispatch, onClose }) {
  const { visit, report } = state;
  const variable = orientationOf(visit) === 'indication_from_reference' ? 'x' : 'y';
  const present = termsText(visit.model?.terms);
  const [draft, setDraft] = useState(/** @type {string|null} */ (null));
  const [wrong, setWrong] = useState(/** @type {Problem|null} */ (null));
  const attempt = (/** @type {Term[]} */ terms) => {
    const changed = withModel(visit, { terms });
    const problem = troubleWith(core, changed);
    setWrong(problem);
    if (problem) return;
    dispatch({ type: 'edit', visit: changed, what: 'shape' });
    setDraft(null);
  };
  const names = [variable, ...influencesOf(visit)];
  return (
    <PanelFrame title="Shape" onClose={onClose} low>
      <p>
        The curves that are thought of. More terms bend more and need more points. At present:{' '}
        <strong>{report?.fit?.formula ?? present}</strong>
      </p>
      <div class="buttons">
        {NAMES.map((name, degree) => {
          const terms = polynomial(variable, degree);
          return (
            <button key={name} type="button" aria-pressed={present === terms.join(', ')} onClick={() => attempt(terms)}>
              {name}
            </button>
          );
        })}
      </div>
      <form
        class="field"
        onSubmit={(event) => {
          event.preventDefault();
          attempt(splitTerms(draft ?? present));
        }}
      >
        <label for="terms">Terms, with commas between</label>
        <textarea
          id="terms"
          rows={2}
          spellcheck={false}
          autocomplete="off"
          value={draft ?? present}
          aria-invalid={wrong ? 'true' : undefined}
          aria-describedby="terms-hint"
          onInput={(event) => setDraft(event.currentTarget.value)}
        />
        <div id="terms-hint">
          {wrong && <WrongTerms problem={wrong} />}
          <p class="hint">
            In {names.join(', ')}: for instance 1, {variable}, {variable}^2 · 1/{variable} · ln({variable}) · exp({variable}) · sqrt(
            {variable}) · sin(2*pi*{variable}){names.length > 1 && ` · ${variable}*${names[1]}`}
          </p>
        </div>
        <button type="submit" disabled={draft === null || draft === present}>
          Use these terms
        </button>
      </form>
    </PanelFrame>
  );
}

/**
 * The text with the place of the error marked.
 * @param {{ problem: Problem }} props
 */
function WrongTerms({ problem }) {
  const { term, position } = problem.args;
  const letters = typeof term === 'string' ? [...term] : [];
  const at = typeof position === 'number' ? position : null;
  return (
    <div class="trouble">
      {letters.length > 0 && at !== null && (
        <p class="term">
          <code>
            {letters.slice(0, at).join('')}
            <mark>{letters[at] ?? ' '}</mark>
            {letters.slice(at + 1).join('')}
          </code>
        </p>
      )}
      <p>{problem.sentence} The shape stays as it was.</p>
    </div>
  );
}

/**
 * What the core says against a shape; null where it can be used.
 * @param {Parts['core']} core
 * @param {Visit} visit
 * @returns {Problem|null}
 */
function troubleWith(core, visit) {
  try {
    const appraisal = core.appraise(visit);
    const { messages } = appraisal.outline();
    appraisal.free();
    return messages.find((message) => message.level === 'error' && message.place.startsWith('model.terms')) ?? null;
  } catch (problem) {
    return { level: 'error', code: '', args: {}, place: 'model.terms', sentence: refusal(problem).sentence };
  }
}

/**
 * @param {string} variable
 * @param {number} degree
 */
function polynomial(variable, degree) {
  return Array.from({ length: degree + 1 }, (_, power) => (power === 0 ? '1' : power === 1 ? variable : `${variable}^${power}`));
}

/** @param {Term[]|Term|undefined} terms */
function termsText(terms) {
  const list = Array.isArray(terms) ? terms : terms ? [terms] : [];
  return list.map((term) => (typeof term === 'string' ? term : JSON.stringify(term))).join(', ');
}

/**
 * At commas, semicolons and line ends outside parentheses; a shape object is kept as one.
 * @param {string} text
 * @returns {Term[]}
 */
function splitTerms(text) {
  const pieces = [];
  let depth = 0;
  let piece = '';
  for (const letter of text) {
    if ('([{'.includes(letter)) depth += 1;
    if (')]}'.includes(letter)) depth -= 1;
    if (depth === 0 && ',;\n'.includes(letter)) {
      pieces.push(piece.trim());
      piece = '';
    } else {
      piece += letter;
    }
  }
  return [...pieces, piece.trim()].filter((term) => term !== '').map(asTerm);
}

/**
 * @param {string} text
 * @returns {Term}
 */
function asTerm(text) {
  if (!text.startsWith('{')) return text;
  try {
    return JSON.parse(text);
  } catch {
    return text;
  }
}
