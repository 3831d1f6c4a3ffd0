// The state of the sheet in one sentence, with what to do next; below it what was just done or refused.

import { recover } from './commands.js';
/** @import { Parts } from './store.js' */
import { isReserved, stateSentence } from './words.js';

const MARKS = { error: '!', warning: '!', note: '·', good: '✓' };

/** @param {Parts} props */
export function StateLine({ core, store, state, dispatch }) {
  const { level, lead, sentence } = stateSentence(core, state);
  const messages = state.report?.messages ?? [];
  const count = messages.length;
  return (
    <div class="state-block">
      <div class={`state-line ${level}`}>
        <p role="status">
          <span class="mark" aria-hidden="true">
            {MARKS[level]}
          </span>
          <strong>{lead}</strong> {sentence}
        </p>
        {state.busy && (
          <button type="button" class="small" onClick={() => store.stop()}>
            Stop and go back
          </button>
        )}
        {count > 0 && (
          <button
            type="button"
            class="change"
            aria-expanded={state.notesOpen}
            onClick={() => dispatch({ type: 'show', change: { notesOpen: !state.notesOpen } })}
          >
            {count === 1 ? '1 note' : `${count} notes`}
          </button>
        )}
      </div>
      {state.notesOpen && count > 0 && (
        <Notes messages={messages} onClose={() => dispatch({ type: 'show', change: { notesOpen: false } })} />
      )}
      {state.visit.recovered && (
        <p class="banner">
          Recovered points: they come from a file that failed its checks ({state.visit.recovered.outcome}). Compare them with the original
          record before use.
        </p>
      )}
      {state.notice && <NoticeBar core={core} store={store} state={state} dispatch={dispatch} />}
    </div>
  );
}

/** @param {{ messages: import('./types.js').Problem[], onClose: () => void }} props */
function Notes({ messages, onClose }) {
  const reserved = messages.filter(isReserved);
  const others = messages.filter((message) => !isReserved(message));
  return (
    <section class="notes" aria-label="Notes">
      {others.length > 0 && (
        <ul>
          {others.map((message) => (
            <li key={message.place + message.code + message.sentence} class={message.level}>
              {message.sentence}
            </li>
          ))}
        </ul>
      )}
      {reserved.length > 0 && (
        <ul class="reserved">
          {reserved.map((message) => (
            <li key={message.place + message.code + message.sentence}>{message.sentence}</li>
          ))}
        </ul>
      )}
      <button type="button" class="small" onClick={onClose}>
        Close
      </button>
    </section>
  );
}

/** @param {Parts} props */
function NoticeBar({ store, state, dispatch }) {
  const { level, sentence, more, recover: opened } = /** @type {import('./types.js').Notice} */ (state.notice);
  return (
    <div class={`notice ${level}`} role={level === 'error' ? 'alert' : 'status'}>
      <p>{sentence}</p>
      {more && more.length > 0 && (
        <details>
          <summary>{more.length === 1 ? '1 line' : `${more.length} lines`}</summary>
          <ul>
            {more.map((line) => (
              <li key={line}>{line}</li>
            ))}
          </ul>
        </details>
      )}
      {opened?.visit && (
        <button type="button" class="small" onClick={() => recover(store, opened)}>
          Recover the points into a new sheet
        </button>
      )}
      <button type="button" class="small" onClick={() => dispatch({ type: 'notice', notice: null })}>
        Close
      </button>
    </div>
  );
}
