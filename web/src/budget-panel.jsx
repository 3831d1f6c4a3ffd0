// Where the uncertainty of the value comes from, source by source.

/** @import { Parts } from './store.js' */
import { PanelFrame } from './panel.jsx';
import { freedomFigure } from './words.js';

/** @param {Parts & { onClose: () => void }} props */
export function BudgetPanel({ core, state, onClose }) {
  const value = state.answer.value;
  const unit = state.report?.units.input ?? '';
  const figure = (/** @type {number} */ number) => core.format_number(number, 2);
  return (
    <PanelFrame title="Where the uncertainty comes from" onClose={onClose} wide>
      {!value?.value && <p>Type a reading: its budget stands here.</p>}
      {value?.value && (
        <>
          <p class="lead">{value.value.display}</p>
          {value.linearised && (
            <p>
              By the law of propagation: {core.format_to(value.linearised.estimate, value.linearised.scale)} {unit}, u ={' '}
              {figure(value.linearised.scale)} {unit}
            </p>
          )}
          <div class="scroll" tabIndex={0} role="region" aria-label="Budget">
            <table class="figures">
              <thead>
                <tr>
                  <th scope="col">source</th>
                  <th scope="col">type</th>
                  <th scope="col">distribution</th>
                  <th scope="col">u</th>
                  <th scope="col">ν</th>
                  <th scope="col">sensitivity</th>
                  <th scope="col">part of u{unit && ` / ${unit}`}</th>
                  <th scope="col">share</th>
                </tr>
              </thead>
              <tbody>
                {value.budget.map((line) => (
                  <tr key={line.source}>
                    <th scope="row">{line.source}</th>
                    <td>{line.type}</td>
                    <td>{line.distribution}</td>
                    <td>
                      {figure(line.standard_uncertainty)} {line.unit}
                    </td>
                    <td>{freedomFigure(line.degrees_of_freedom)}</td>
                    <td>{figure(line.sensitivity)}</td>
                    <td>{figure(line.contribution)}</td>
                    <td>{core.format_number(line.share_of_variance * 100, 2)} %</td>
                  </tr>
                ))}
              </tbody>
            </table>
          </div>
          <p class="hint">Shares are of the variance u²; they add up to the whole.</p>
        </>
      )}
    </PanelFrame>
  );
}
