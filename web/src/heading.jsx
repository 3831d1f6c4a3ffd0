// The heading of the sheet: what is calibrated, against what, when; and the buttons that concern the whole sheet.

import { saveLeaf } from './commands.js';
/** @import { Parts } from './store.js' */
import { dateWords, statesOf, titleOf } from './words.js';

/** @param {Parts} props */
export function Heading({ core, store, state, dispatch }) {
  const { visit, past, future } = state;
  const undo = past.at(-1)?.what;
  const redo = future.at(-1)?.what;
  return (
    <header class="heading">
      <div class="heading-words">
        <h1>{titleOf(visit)}</h1>
        <p class="subline">
          <span title={particulars(core, visit)}>{particulars(core, visit)}</span>
          <button
            type="button"
            class="change"
            aria-label="Change instrument, standard and occasion"
            onClick={() => dispatch({ type: 'panel', panel: { name: 'details' } })}
          >
            change
          </button>
        </p>
      </div>
      <p class="occasion">{[dateWords(visit.occasion?.date), statesOf(visit, state.entering)].filter(Boolean).join(' · ')}</p>
      <div class="tools">
        <button
          type="button"
          class="tool icon"
          disabled={!undo}
          title={undo && `Undo: ${undo}`}
          aria-label={undo ? `Undo: ${undo}` : 'Undo'}
          onClick={() => dispatch({ type: 'undo' })}
        >
          ↶
        </button>
        <button
          type="button"
          class="tool icon"
          disabled={!redo}
          title={redo && `Redo: ${redo}`}
          aria-label={redo ? `Redo: ${redo}` : 'Redo'}
          onClick={() => dispatch({ type: 'redo' })}
        >
          ↷
        </button>
        <button type="button" class="tool" onClick={() => dispatch({ type: 'panel', panel: { name: 'sheet' } })}>
          Sheet
        </button>
        <button type="button" class="tool primary" onClick={() => saveLeaf(core, store)}>
          Save leaf
        </button>
      </div>
    </header>
  );
}

/**
 * @param {Parts['core']} core
 * @param {Parts['state']['visit']} visit
 */
function particulars(core, visit) {
  const { place, serial, quantity, unit, range, output } = visit.instrument ?? {};
  const shown = output?.unit && output.unit !== unit ? `shown in ${output.unit}` : '';
  const standard = visit.standards?.[0];
  const parts = [
    place,
    serial && `no. ${serial}`,
    quantity,
    range && core.format_interval(range[0], range[1], unit ?? ''),
    shown,
    output?.resolution ? `least digit ${output.resolution} ${output.unit || unit || ''}`.trim() : '',
    standard &&
      `against ${[standard.name || standard.id, standard.certificate && `certificate ${standard.certificate}`].filter(Boolean).join(', ')}`,
  ];
  const said = parts.filter(Boolean).join(' · ');
  return said || 'Instrument, place, range, units and standard are not named yet';
}
