/** Summaries of large samples off the page's thread. */

import {SampleError} from './angles.js';
import {summarise} from './summary.js';

/** @typedef {import('./summary.js').Summary} Summary */
/** @typedef {import('./summary.js').Options} Options */

/**
 * Starts the worker once. `first` is the summary without modes, at once; `whole` follows.
 * @returns {{summarise: (anglesDeg: number[], options?: Options) => {first: Summary, whole: Promise<Summary>}, close: () => void}}
 */
export function summariseApart() {
  const worker = new Worker(new URL('./summary_worker.js', import.meta.url), {type: 'module'});
  /** @type {Map<number, {resolve: (summary: Summary) => void, reject: (error: Error) => void}>} */
  const waiting = new Map();
  let last = 0;
  worker.onmessage = ({data}) => {
    const asked = waiting.get(data.id);
    waiting.delete(data.id);
    if (data.summary) asked?.resolve(data.summary);
    else asked?.reject(new SampleError(data.problem));
  };
  worker.onerror = () => {
    for (const asked of waiting.values()) asked.reject(new Error('The summary could not be computed.'));
    waiting.clear();
  };
  return {
    summarise(anglesDeg, options = {}) {
      const first = summarise(anglesDeg, {...options, modes: 'pending'});
      if (first.outcome !== 'pending') return {first, whole: Promise.resolve(first)};
      last += 1;
      const id = last;
      const whole = new Promise((/** @type {(summary: Summary) => void} */ resolve, reject) => {
        waiting.set(id, {resolve, reject});
      });
      worker.postMessage({id, anglesDeg, options});
      return {first, whole};
    },
    close: () => worker.terminate(),
  };
}
