// The answers: a reading as a value, always in view, and the fit it comes from.

import { TwoWays } from './fields.jsx';
/** @import { Parts } from './store.js' */
/** @import { Report } from './types.js' */
import { influencesOf } from './visit.js';
import { CONDITIONS, coverageWords, freedomWords, noiseWords, outputUnit, valueReservations } from './words.js';

/** @param {Parts} props */
export function Answers(props) {
  const { report } = props.state;
  return (
    <section class="answers" aria-label="Answers">
      <div class={`answer reading${props.state.answer.value ? '' : ' empty'}`}>
        <h2>
          <label for="reading">Reading → value</label>
        </h2>
        <ReadingField {...props} id="reading" />
        <ReadingWords {...props} />
      </div>
      <div class="answer">
        <h2>Fit</h2>
        {report?.fit ? <FitSummary {...props} report={report} /> : <p class="quiet-words">{waiting(report)}</p>}
      </div>
      {report?.fit && (
        <div class="answer">
          <h2>Coefficients</h2>
          <Coefficients {...props} report={report} />
        </div>
      )}
      {report && report.checks.length > 0 && (
        <div class="answer">
          <h2>Checks</h2>
          <ul class="plain checks">
            {report.checks.map((check) => (
              <li key={check.check + check.code}>{check.sentence}</li>
            ))}
          </ul>
        </div>
      )}
    </section>
  );
}

/** @param {Parts & { id: string }} props */
export function ReadingField({ state, dispatch, id }) {
  const { visit, reading, answer } = state;
  const names = influencesOf(visit);
  const wrong = answer.problem !== null && reading.text.trim() !== '';
  return (
    <div class="reading-row">
      <input
        id={id}
        class="reading-input"
        inputmode="decimal"
        autocomplete="off"
        value={reading.text}
        placeholder="reading"
        aria-invalid={wrong ? 'true' : undefined}
        aria-describedby={`${id}-words`}
        title="Several repeats of one reading: 812; 813"
        onInput={(event) => dispatch({ type: 'reading', text: event.currentTarget.value })}
        onFocus={(event) => event.currentTarget.select()}
      />
      <span class="unit">{outputUnit(visit)}</span>
      {names.map((name) => (
        <label key={name} class="inline">
          {name} / {visit.instrument?.influences?.[name]?.unit ?? ''}
          <input
            class="small-number"
            inputmode="decimal"
            value={reading.influences[name] ?? ''}
            placeholder={visit.conditions?.[name] === undefined ? '' : String(visit.conditions[name])}
            onInput={(event) => dispatch({ type: 'reading-influence', name, text: event.currentTarget.value })}
          />
        </label>
      ))}
      <span class="arrow" aria-hidden="true">
        →
      </span>
      <output class="value" for={id}>
        {answer.value?.value?.display ?? '–'}
      </output>
    </div>
  );
}

/** @param {Parts} props */
export function ReadingWords({ core, state, dispatch }) {
  const { answer, report, reading } = state;
  if (answer.alternatives) {
    const choose = (/** @type {number[]} */ values) => dispatch({ type: 'reading', text: values.map(String).join('; ') });
    return (
      <p id="reading-words" class="reading-words">
        <TwoWays text={reading.text} alternatives={answer.alternatives} onChoose={choose} />
      </p>
    );
  }
  if (answer.problem)
    return (
      <p id="reading-words" class="reading-words trouble">
        {answer.problem}
      </p>
    );
  if (!answer.value || !report)
    return (
      <p id="reading-words" class="reading-words">
        Type what the instrument shows; repeats of one value as 812; 813.
      </p>
    );
  const reservations = valueReservations(answer.value);
  return (
    <p id="reading-words" class="reading-words">
      {answer.value.value && (
        <span>
          {coverageWords(core, report, answer.value)}. {answer.value.value.display_interval}.{' '}
        </span>
      )}
      {reservations.map((sentence) => (
        <span key={sentence} class="reservation">
          ! {sentence}{' '}
        </span>
      ))}
      {CONDITIONS}
      {answer.value.budget.length > 0 && (
        <button type="button" class="change" onClick={() => dispatch({ type: 'panel', panel: { name: 'budget' } })}>
          budget
        </button>
      )}
    </p>
  );
}

/** @param {Parts & { report: Report }} props */
function FitSummary({ core, report }) {
  const { fit, units } = report;
  if (!fit) return null;
  const { interval } = fit.noise;
  const from = interval ? ` (${core.format_interval(interval[0], interval[1], units.response)})` : '';
  return (
    <>
      <p class="big">{fit.formula}</p>
      <p class="quiet-words">
        {noiseWords(core, report)}
        {from}
      </p>
      <p class="quiet-words">
        {fit.points_used} {fit.points_used === 1 ? 'indication' : 'indications'}, {freedomWords(report)}
      </p>
    </>
  );
}

/** @param {Parts & { report: Report }} props */
function Coefficients({ core, report }) {
  const terms = report.fit?.terms ?? [];
  return (
    <div class="coefficients" tabIndex={0} role="region" aria-label="Coefficients">
      <table>
        <tbody>
          {terms.map((term, at) => (
            <tr key={term.term}>
              <th scope="row">
                {letter(at)}
                <small>{term.term === '1' ? '' : `·${term.display}`}</small>
              </th>
              <td>{core.format_value(term.estimate, (term.interval[1] - term.interval[0]) / 2, term.unit)}</td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}

/** @param {number} at */
function letter(at) {
  return at < 26 ? String.fromCharCode(97 + at) : `c${at + 1}`;
}

/** @param {Report|null} report */
function waiting(report) {
  return report && report.points.length > 0 ? 'No curve yet: the line at the top says why.' : 'No points yet.';
}
