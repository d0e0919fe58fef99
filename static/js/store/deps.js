/** What a notebook needs of its surroundings, so that tests can hand in their own. */

import {Problem} from './problem.js';

/**
 * @typedef {object} Deps
 * @property {string} app version of this app, written into every entry
 * @property {string} base address of the store, '' for where the page came from
 * @property {typeof fetch} fetch
 * @property {IDBFactory} indexedDB
 * @property {Crypto} crypto
 * @property {() => number} now wall clock, milliseconds
 * @property {() => number} random 0 to below 1
 * @property {(work: () => void, millis: number) => number} setTimer
 * @property {(timer: number) => void} clearTimer
 * @property {LockManager | null} locks null: hand-over is not kept to one page
 * @property {(name: string) => BroadcastChannel | null} channel to the other pages of this notebook
 * @property {(listener: () => void) => () => void} onChance calls when the network returns or the page is seen again; returns how to stop it
 * @property {() => Promise<boolean>} persist asks that the browser never clears what is kept
 */

/**
 * The browser's own.
 * @param {Partial<Deps> & {app: string}} own what differs
 * @returns {Deps}
 */
export function browserDeps(own) {
  return {
    base: '',
    fetch: (input, init) => fetch(input, init),
    indexedDB,
    crypto,
    now: () => Date.now(),
    random: () => Math.random(),
    setTimer: (work, millis) => window.setTimeout(work, millis),
    clearTimer: (timer) => window.clearTimeout(timer),
    locks: navigator.locks ?? null,
    channel: (name) => ('BroadcastChannel' in globalThis ? new BroadcastChannel(name) : null),
    onChance,
    persist: async () => (await navigator.storage?.persist?.()) ?? false,
    ...own,
  };
}

/**
 * Without a secure context nothing can be hashed and nothing is safe: say so at once.
 * @param {Deps} deps
 */
export function checkSecure(deps) {
  if (deps.crypto?.subtle) return;
  throw new Problem(
    'This address is not secure, so nothing can be kept here',
    'browsers open their store and their hashes only to https addresses and to localhost',
    'Open Ergbook at its https address.',
  );
}

/**
 * @param {() => void} listener
 * @returns {() => void}
 */
function onChance(listener) {
  const seen = () => {
    if (document.visibilityState === 'visible') listener();
  };
  window.addEventListener('online', listener);
  document.addEventListener('visibilitychange', seen);
  return () => {
    window.removeEventListener('online', listener);
    document.removeEventListener('visibilitychange', seen);
  };
}
