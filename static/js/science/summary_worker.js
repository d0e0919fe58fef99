/** A module worker that summarises: receives {id, anglesDeg, options}, posts {id, summary} or {id, problem}. */

import {summarise} from './summary.js';

/** @typedef {import('./summary.js').Options} Options */

/** @type {{onmessage: ((event: MessageEvent<{id: number, anglesDeg: number[], options: Options}>) => void) | null, postMessage: (message: unknown) => void}} */
const worker = /** @type {any} */ (globalThis);

worker.onmessage = ({data: {id, anglesDeg, options}}) => {
  try {
    worker.postMessage({id, summary: summarise(anglesDeg, options)});
  } catch (error) {
    worker.postMessage({id, problem: error instanceof Error ? error.message : String(error)});
  }
};
