// A leaf that fails its checks: what was changed, no value, and the points for a new sheet that says where they are from.

/** @import { Parts } from './store.js' */
import { recover } from './commands.js';

const TITLES = /** @type {Record<string, string>} */ ({
  differs: 'The results in this file are not those of its data',
  newer_program: 'This file was written by a newer program',
});

/** @param {Parts} props */
export function AlteredView({ store, state }) {
  const opened = state.opened;
  if (!opened) return null;
  const count = opened.visit?.points?.length ?? 0;
  return (
    <main class="altered">
      <h1>{TITLES[opened.outcome] ?? 'This file is not as it was saved'}</h1>
      <p class="lead">{opened.sentence}</p>
      {opened.changed.length > 0 && (
        <ul>
          {opened.changed.map((section) => (
            <li key={section}>Changed: {section}</li>
          ))}
        </ul>
      )}
      {opened.field && (
        <p>
          Place: <code>{opened.field}</code>
        </p>
      )}
      <p>No value is shown, since none could be trusted. Ask for the original file, or compare the digest on the signed record.</p>
      {count > 0 && (
        <button type="button" class="primary" onClick={() => recover(store, opened)}>
          Recover the {count} points into a new sheet
        </button>
      )}
    </main>
  );
}
