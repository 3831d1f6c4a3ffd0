// A panel beside the sheet: not modal, so that the picture and the answers show the effect of a change at once.

import { useEffect, useRef } from 'preact/hooks';

/**
 * Takes the focus when it opens, gives it back when it closes; Escape closes. `low` leaves the answers free on a laptop.
 * @param {{ title: string, onClose: () => void, children: import('preact').ComponentChildren, wide?: boolean, low?: boolean }} props
 */
export function PanelFrame({ title, onClose, children, wide, low }) {
  const frame = useRef(/** @type {HTMLElement|null} */ (null));
  useEffect(() => {
    const before = document.activeElement;
    frame.current?.querySelector('h2')?.focus();
    return () => {
      if (before instanceof HTMLElement && before.isConnected) before.focus();
    };
  }, []);
  return (
    <section
      ref={frame}
      class={`panel${wide ? ' wide' : ''}${low ? ' low' : ''}`}
      role="dialog"
      aria-label={title}
      onKeyDown={(event) => {
        if (event.key === 'Escape') onClose();
      }}
    >
      <div class="panel-head">
        <h2 tabIndex={-1}>{title}</h2>
        <button type="button" class="quiet" onClick={onClose}>
          Close
        </button>
      </div>
      <div class="panel-body">{children}</div>
    </section>
  );
}
