// What this program is, its caution, and the licences of what is inside.

/** @import { Core } from './types.js' */
import notices from 'bandleaf:notices';
import { useEffect, useRef, useState } from 'preact/hooks';
import { unpack } from './bindings.js';
import { CAUTION } from './words.js';

/** @param {{ core: Core, onClose: () => void }} props */
export function About({ core, onClose }) {
  const dialog = useRef(/** @type {HTMLDialogElement|null} */ (null));
  const [licences, setLicences] = useState('');
  useEffect(() => {
    dialog.current?.showModal();
    unpack(notices).then((bytes) => setLicences(new TextDecoder().decode(bytes)));
  }, []);
  return (
    <dialog ref={dialog} class="about" aria-labelledby="about-title" onClose={onClose}>
      <h2 id="about-title">Bandleaf {core.version()}</h2>
      <p>
        Calibration curves with honest uncertainty from a handful of points, in one file, without a network. Everything shown is computed on
        this device from the visit inside; nothing is sent anywhere.
      </p>
      <p>
        <strong>Caution.</strong> {CAUTION}
      </p>
      <p>Licence: MIT. No warranty of any kind.</p>
      <details>
        <summary>Licences of what is inside</summary>
        <pre class="licences" tabIndex={0}>
          {licences}
        </pre>
      </details>
      <button type="button" onClick={() => dialog.current?.close()}>
        Close
      </button>
    </dialog>
  );
}
