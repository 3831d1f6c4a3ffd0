// Long tables are appraised beside the page, in a worker made from this very program, so that typing never waits and
// the work can be stopped.

/** @import { Appraisal, Core, Followed, Texts, Value, Visit } from './types.js' */
import { startWith, unpack } from './bindings.js';
import { follow } from './following.js';

/** @typedef {{ number: number, bytes?: Uint8Array, visit?: Visit, reading?: object }} Question */

/**
 * The page's side.
 * @param {Texts} texts
 */
export function createHelper(texts) {
  /** @type {Worker|null} */
  let worker = null;
  /** @type {Visit|null} what the worker has appraised */
  let held = null;
  let number = 0;
  /** @type {Map<number, { resolve: (result: any) => void, reject: (problem: unknown) => void }>} */
  const waiting = new Map();

  /** @param {unknown} [problem] why, where nobody asked for it */
  function stop(problem = null) {
    worker?.terminate();
    worker = null;
    held = null;
    for (const { reject } of waiting.values()) reject(problem);
    waiting.clear();
  }

  /**
   * @param {Omit<Question, 'number'>} question
   * @returns {Promise<any>}
   */
  async function ask(question) {
    const bytes = worker ? undefined : await unpack(texts.wasm);
    worker ??= hired();
    number += 1;
    const asked = { ...question, number, bytes };
    return new Promise((resolve, reject) => {
      waiting.set(asked.number, { resolve, reject });
      worker?.postMessage(asked);
    });
  }

  function hired() {
    const address = URL.createObjectURL(new Blob([texts.program], { type: 'text/javascript' }));
    const next = new Worker(address);
    URL.revokeObjectURL(address);
    next.onmessage = ({ data }) => {
      const answered = waiting.get(data.number);
      waiting.delete(data.number);
      if (data.problem) answered?.reject(data.problem);
      else answered?.resolve(data.result);
    };
    next.onerror = () => stop(new Error('the helper did not start'));
    return next;
  }

  return {
    stop: () => stop(),
    /**
     * Rejects with a problem, or with `null` where the work was stopped.
     * @param {Visit} visit
     * @returns {Promise<Followed>}
     */
    async follow(visit) {
      stop();
      const followed = await ask({ visit });
      held = visit;
      return followed;
    },
    /**
     * @param {Visit} visit
     * @param {object} reading
     * @returns {Promise<Value>}
     */
    async read(visit, reading) {
      return ask(held === visit ? { reading } : { visit, reading });
    },
  };
}

/** The worker's side: one visit at a time. */
export function serve() {
  /** @type {Core|null} */
  let core = null;
  /** @type {Appraisal|null} */
  let appraisal = null;
  self.onmessage = async (/** @type {MessageEvent<Question>} */ { data }) => {
    const { number, bytes, visit, reading } = data;
    try {
      if (bytes) core = await startWith(bytes);
      if (!core) throw new Error('the calculation has not started');
      let result = null;
      if (visit) {
        const next = follow(core, visit);
        appraisal?.free();
        appraisal = next.appraisal;
        result = next.followed;
      }
      self.postMessage({ number, result: reading ? appraisal?.read(reading) : result });
    } catch (problem) {
      const { sentence, message } = /** @type {{ sentence?: string, message?: string }} */ (problem ?? {});
      self.postMessage({ number, problem: { sentence, message: message ?? String(problem) } });
    }
  };
}

/** @typedef {ReturnType<typeof createHelper>} Helper */
