/** Scripts that the page may start by address, where the browser wants them vouched for: our own only. */

/** Vouch for the service worker and the workers of the shell, and for nothing else. */
export function vouchForOwnScripts() {
  const root = new URL('..', location.href).href;
  const types = /** @type {any} */ (globalThis).trustedTypes;
  types?.createPolicy('default', {
    /** @param {string} address */
    createScriptURL(address) {
      const {href} = new URL(address, location.href);
      return href === `${root}sw.js` || href.startsWith(`${root}shell/`) ? href : null;
    },
  });
}
