// A leaf as its reader sees it: one reading, one value; the whole sheet on request.

/** @import { Parts } from './store.js' */
/** @import { Opened } from './types.js' */
import { ReadingField, ReadingWords } from './answers.jsx';
import { Picture } from './picture.jsx';
import { Drafts } from './sheet-panel.jsx';
import { CAUTION, dateWords, fitWords, outcomeWords, outputUnit, statesOf, titleOf } from './words.js';

/** @param {Parts} props */
export function LeafView(props) {
  const { core, state, dispatch } = props;
  const { visit, report, opened } = state;
  const sheet = () => dispatch({ type: 'show', change: { stage: 'sheet' } });
  return (
    <div class="leaf">
      <header class="leaf-heading">
        <h1>{titleOf(visit)}</h1>
        <p>
          {[visit.instrument?.place, `Calibrated ${dateWords(visit.occasion?.date)}`, statesOf(visit, state.entering)]
            .filter(Boolean)
            .join(' · ')}
        </p>
        {opened && (
          <p class={`badge ${opened.outcome}`}>
            <span aria-hidden="true">{opened.outcome === 'identical' || opened.outcome === 'same' ? '✓ ' : '! '}</span>
            {outcomeWords(opened.outcome)}
          </p>
        )}
      </header>
      <main>
        <section class="card leaf-reading" aria-label="Reading to value">
          <h2>
            <label for="reading">The instrument shows, in {outputUnit(visit) || 'its unit'}</label>
          </h2>
          <ReadingField {...props} id="reading" />
          <ReadingWords {...props} />
        </section>
        <section class="card">
          <Picture {...props} plain />
        </section>
        <details class="leaf-more">
          <summary>
            <span>How this was found</span>
            <span class="summary-words">{report?.fit?.formula}</span>
          </summary>
          <p>{report && fitWords(core, report)}</p>
          <ul class="plain">
            {(report?.messages ?? []).map((message) => (
              <li key={message.place + message.code}>{message.sentence}</li>
            ))}
          </ul>
        </details>
        {opened && <Check core={core} opened={opened} digest={report?.visit_digest ?? core.digest(visit)} />}
        <Drafts {...props} onClose={() => {}} />
        <p class="leaf-buttons">
          <button type="button" onClick={sheet}>
            Open the full sheet
          </button>
        </p>
        <p class="hint">{CAUTION}</p>
      </main>
    </div>
  );
}

/** @param {{ core: Parts['core'], opened: Opened, digest: string }} props */
function Check({ opened, digest }) {
  return (
    <details class="leaf-more">
      <summary>
        <span>Check this file</span>
        <span class="summary-words">{opened.outcome === 'identical' ? 'consistent, recomputed' : opened.outcome.replaceAll('_', ' ')}</span>
      </summary>
      <p>{opened.sentence}</p>
      <p>
        Digest of the visit: <code class="digest">{digest}</code>
      </p>
      <p class="hint">It shows that the file is consistent, not who wrote it: compare the digest with the one on the signed record.</p>
    </details>
  );
}

/** @param {Parts} props */
export function LeafStrip({ state, dispatch }) {
  const { opened, visit, saved, past } = state;
  if (!opened) return null;
  const changed = past.length > 0 && visit !== saved;
  return (
    <section class="leaf-strip" aria-label="Leaf">
      <span>
        Leaf: {outcomeWords(opened.outcome)}.{changed && ' The sheet has been changed since; the file has not.'}
      </span>
      <button type="button" class="change" onClick={() => dispatch({ type: 'show', change: { stage: 'leaf' } })}>
        reader's view
      </button>
    </section>
  );
}
