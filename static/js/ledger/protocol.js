/** Every version of the entry protocol, and how an older one is read today; mirror of fieldlog/ledger/protocol.py. */

/** In order of release; the last is the one written. */
export const VERSIONS = [0];

/** The version that this app writes. */
export const WRITTEN = VERSIONS[VERSIONS.length - 1];

/**
 * Whether an entry of this version can be read here; a newer one is kept raw until the app is updated.
 * @param {unknown} version
 * @returns {boolean}
 */
export function isKnown(version) {
  return typeof version === 'number' && VERSIONS.includes(version);
}

/**
 * The body as the newest version says it. Kept texts are never rewritten.
 * @template T
 * @param {T} body
 * @returns {T}
 */
export function upcast(body) {
  return body;
}
