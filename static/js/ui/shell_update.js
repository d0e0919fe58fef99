/** The service worker: registered, and its successor offered, never forced on an open form. */

import {watched} from './element.js';

/**
 * @typedef {object} ShellUpdate
 * @property {string} app version
 * @property {string} shell hash of the shell that this page came from
 * @property {import('./element.js').Watched<boolean>} waiting a newer shell is ready
 * @property {import('./element.js').Watched<boolean>} offline the shell is on this phone: opens without a network
 * @property {() => void} take the newer shell takes over, and the page opens anew
 */

/**
 * @param {{app: string, shell: string, workers: ServiceWorkerContainer | undefined, reload: () => void}} deps
 * @returns {ShellUpdate}
 */
export function createShellUpdate({app, shell, workers, reload}) {
  const waiting = watched(false);
  const offline = watched(false);
  /** @type {ServiceWorkerRegistration | null} */
  let registration = null;
  let taken = false;

  async function register() {
    if (!workers) return;
    registration = await workers.register('../sw.js', {scope: './', updateViaCache: 'none'});
    note();
    registration.addEventListener('updatefound', () => registration?.installing?.addEventListener('statechange', note));
    await workers.ready;
    note();
  }

  function note() {
    waiting.set(Boolean(registration?.waiting && registration.active));
    offline.set(Boolean(registration?.active));
  }

  workers?.addEventListener('controllerchange', () => taken && reload());
  void register().catch(() => offline.set(false)); // a private window, or no room: the page still works online
  return {
    app,
    shell,
    waiting,
    offline,
    take() {
      taken = true;
      registration?.waiting?.postMessage('take over');
    },
  };
}
