// The page: which view is shown, and what listens to the whole window.

/** @import { Store } from './store.js' */
/** @import { Core } from './types.js' */
import { useEffect, useState } from 'preact/hooks';
import { About } from './about.jsx';
import { AlteredView } from './altered-view.jsx';
import { Answers } from './answers.jsx';
import { BudgetPanel } from './budget-panel.jsx';
import { CoveragePanel, NominalPanel, OrientationPanel } from './choice-panels.jsx';
import { Choices } from './choices.jsx';
import { openFile, pasted, saveLeaf } from './commands.js';
import { DetailsPanel } from './details-panel.jsx';
import { Heading } from './heading.jsx';
import { IntakePanel } from './intake-panel.jsx';
import { KnownPanel } from './known-panel.jsx';
import { LeafStrip, LeafView } from './leaf-view.jsx';
import { NoisePanel } from './noise-panel.jsx';
import { Picture } from './picture.jsx';
import { PointPanel } from './point-panel.jsx';
import { Points } from './points.jsx';
import { ShapePanel } from './shape-panel.jsx';
import { DraftOffer, SheetPanel } from './sheet-panel.jsx';
import { StateLine } from './state-line.jsx';
import { CAUTION, coverageWords } from './words.js';

const SPOKEN_AFTER = 700;

/** @param {{ core: Core, store: Store }} props */
export function Sheet({ core, store }) {
  const [state, setState] = useState(store.state());
  useEffect(() => store.subscribe(() => setState(store.state())), [store]);
  useEffect(() => listen(core, store), [store]);
  const parts = { core, store, state, dispatch: store.dispatch };
  if (state.stage === 'altered') return <AlteredView {...parts} />;
  return (
    <>
      {state.stage === 'leaf' ? (
        <LeafView {...parts} />
      ) : (
        <div class="sheet">
          <div class="top">
            <Heading {...parts} />
            <LeafStrip {...parts} />
            <StateLine {...parts} />
            <DraftOffer {...parts} />
          </div>
          <main class="work">
            <Points {...parts} />
            <Picture {...parts} />
          </main>
          <Answers {...parts} />
          <Choices {...parts} />
          <footer class="caution">{CAUTION}</footer>
        </div>
      )}
      <OpenPanel {...parts} />
      <Spoken {...parts} />
    </>
  );
}

const PANELS = /** @type {Record<string, (props: any) => import('preact').VNode|null>} */ ({
  details: DetailsPanel,
  sheet: SheetPanel,
  shape: ShapePanel,
  known: KnownPanel,
  noise: NoisePanel,
  coverage: CoveragePanel,
  orientation: OrientationPanel,
  nominal: NominalPanel,
  budget: BudgetPanel,
});

/** @param {import('./store.js').Parts} parts */
function OpenPanel(parts) {
  const { panel } = parts.state;
  const close = () => parts.dispatch({ type: 'panel', panel: null });
  if (!panel) return null;
  if (panel.name === 'about') return <About core={parts.core} onClose={close} />;
  if (panel.name === 'point' && panel.point !== undefined)
    return <PointPanel key={panel.point} {...parts} index={panel.point} onClose={close} />;
  if (panel.name === 'intake' && panel.intake) return <IntakePanel {...parts} intake={panel.intake} onClose={close} />;
  const Named = PANELS[panel.name];
  return Named ? <Named key={panel.name} {...parts} onClose={close} /> : null;
}

/**
 * The value in a live region, once the typing has paused.
 * @param {import('./store.js').Parts} props
 */
function Spoken({ core, state }) {
  const { answer, report, said } = state;
  const value = answer.value;
  const words = value?.value && report ? `Value ${value.value.display}, ${coverageWords(core, report, value)}` : (answer.problem ?? '');
  const [spoken, setSpoken] = useState('');
  useEffect(() => {
    const timer = setTimeout(() => setSpoken(words), SPOKEN_AFTER);
    return () => clearTimeout(timer);
  }, [words]);
  return (
    <>
      <p class="unseen" aria-live="polite">
        {spoken}
      </p>
      <p class="unseen" aria-live="polite">
        {said}
      </p>
    </>
  );
}

/**
 * Paste, drop and shortcuts anywhere on the page.
 * @param {Core} core
 * @param {Store} store
 */
function listen(core, store) {
  const ending = new AbortController();
  const { signal } = ending;
  const isSheet = () => store.state().stage === 'sheet';
  document.addEventListener('paste', (event) => isSheet() && pasted(event, core, store), { signal });
  document.addEventListener(
    'dragover',
    (event) => {
      event.preventDefault();
      if (event.dataTransfer) event.dataTransfer.dropEffect = isSheet() ? 'copy' : 'none';
    },
    { signal },
  );
  document.addEventListener(
    'drop',
    (event) => {
      event.preventDefault();
      const file = event.dataTransfer?.files[0];
      if (file && isSheet()) openFile(core, store, file);
    },
    { signal },
  );
  document.addEventListener('keydown', (event) => isSheet() && shortcut(event, core, store), { signal });
  return () => ending.abort();
}

/**
 * @param {KeyboardEvent} event
 * @param {Core} core
 * @param {Store} store
 */
function shortcut(event, core, store) {
  if (!(event.ctrlKey || event.metaKey) || event.altKey) return;
  const key = event.key.toLowerCase();
  const action = { z: event.shiftKey ? 'redo' : 'undo', y: 'redo' }[key];
  if (action) {
    event.preventDefault();
    settleField();
    store.dispatch({ type: action });
  } else if (key === 's') {
    event.preventDefault();
    settleField();
    saveLeaf(core, store);
  }
}

/** What is being typed counts, before it is undone or saved. */
function settleField() {
  const field = document.activeElement;
  if (!(field instanceof HTMLInputElement || field instanceof HTMLTextAreaElement)) return;
  field.blur();
  field.focus();
}
