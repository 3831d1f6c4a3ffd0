// Files in and out: choosing, dropping and saving, without a server.

const LARGEST = 32 * 1024 * 1024;

/**
 * The bytes of a file, or a sentence where it is too large to be one of ours. Its size is looked at before it is read.
 * @param {File} file
 * @returns {Promise<{ bytes: Uint8Array, sentence: null } | { bytes: null, sentence: string }>}
 */
export async function readFile(file) {
  if (file.size > LARGEST)
    return {
      bytes: null,
      sentence: `“${file.name}” has ${Math.round(file.size / 1048576)} MB and was not read: files up to ${LARGEST / 1048576} MB are. Cut the data down to the calibration points.`,
    };
  try {
    return { bytes: new Uint8Array(await file.arrayBuffer()), sentence: null };
  } catch {
    return { bytes: null, sentence: `“${file.name}” could not be read: it was moved, or it is a folder. Choose the file again.` };
  }
}

/**
 * Asks for one file.
 * @param {string} accept
 * @returns {Promise<File|null>}
 */
export function chooseFile(accept) {
  return new Promise((resolve) => {
    const input = document.createElement('input');
    input.type = 'file';
    input.accept = accept;
    input.addEventListener('change', () => resolve(input.files?.[0] ?? null));
    input.addEventListener('cancel', () => resolve(null));
    input.click();
  });
}

/**
 * Saves bytes: asks where, in browsers that can, and downloads them in the others.
 * @param {Uint8Array|string} content
 * @param {string} name
 * @param {string} type
 * @returns {Promise<'saved'|'downloaded'|'cancelled'>}
 */
export async function saveFile(content, name, type) {
  const blob = new Blob([/** @type {BlobPart} */ (content)], { type });
  const picker = /** @type {any} */ (globalThis).showSaveFilePicker;
  if (typeof picker !== 'function') return download(blob, name);
  try {
    const handle = await picker({ suggestedName: name });
    const stream = await handle.createWritable();
    await stream.write(blob);
    await stream.close();
    return 'saved';
  } catch (cause) {
    if (cause instanceof DOMException && cause.name === 'AbortError') return 'cancelled';
    return download(blob, name);
  }
}

/**
 * A file name that every system accepts, from the instrument and the date.
 * @param {string} title
 * @param {string} date
 * @param {string} ending
 */
export function fileName(title, date, ending) {
  const plain = title
    .normalize('NFKD')
    .replace(/[^\p{L}\p{N}]+/gu, '-')
    .replace(/^-+|-+$/g, '')
    .slice(0, 60)
    .toLowerCase();
  return [plain || 'sheet', date].filter((part) => part !== '').join('-') + ending;
}

/**
 * @param {Blob} blob
 * @param {string} name
 * @returns {'downloaded'}
 */
function download(blob, name) {
  const link = document.createElement('a');
  link.href = URL.createObjectURL(blob);
  link.download = name;
  document.body.append(link);
  link.click();
  link.remove();
  setTimeout(() => URL.revokeObjectURL(link.href), 60000);
  return 'downloaded';
}
