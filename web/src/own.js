// The parts of this very file, as the elements that carry them hold them.

/** @import { Texts } from './types.js' */

/** @returns {Texts} */
export function ownTexts() {
  return {
    style: textOf('style'),
    shell: textOf('shell'),
    seal: textOf('seal'),
    visit: textOf('visit'),
    wasm: textOf('wasm'),
    program: textOf('program'),
  };
}

/** @param {string} id */
function textOf(id) {
  return document.getElementById(id)?.textContent ?? '';
}
