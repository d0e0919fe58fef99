/**
 * The shell offline, nothing else. The store puts `const SHELL = {hash, files}` before this text.
 *
 * A new shell is cached whole or not at all, waits, and takes over only when the page asks for it
 * with no form open. Data never pass through here: /api is left to the page.
 */

/** @type {ServiceWorkerGlobalScope} */
const sw = /** @type {any} */ (self);

/** @typedef {{hash: string, files: string[]}} Shell */
/** @type {Shell} */
// @ts-ignore SHELL is declared in the line that the store puts first
const shell = SHELL;

const PREFIX = 'ergbook-shell-';
const CACHE = PREFIX + shell.hash;
const ROOT = new URL('./', sw.location.href).href;
const FOLDER = `${ROOT}shell/${shell.hash}/`;
const PAGE = `${FOLDER}page.html`;

sw.addEventListener('install', (event) => event.waitUntil(fetchShell()));
sw.addEventListener('activate', (event) => event.waitUntil(dropOlder()));
sw.addEventListener('message', (event) => {
  if (event.data === 'take over') void sw.skipWaiting();
});
sw.addEventListener('fetch', (event) => {
  const {request} = event;
  if (request.method !== 'GET') return;
  const url = request.url.split(/[?#]/)[0];
  if (request.mode === 'navigate' && url === `${ROOT}phone/`) event.respondWith(cachedOrFetched(PAGE, request));
  else if (url.startsWith(`${ROOT}shell/`)) event.respondWith(cachedOrFetched(url, request));
});

/** Put every file of the shell into its cache; one failure fails the install. */
async function fetchShell() {
  const cache = await caches.open(CACHE);
  try {
    await Promise.all(shell.files.map((file) => fetchInto(cache, FOLDER + file)));
  } catch (error) {
    await caches.delete(CACHE);
    throw error;
  }
}

/**
 * @param {Cache} cache
 * @param {string} url
 */
async function fetchInto(cache, url) {
  const answer = await fetch(url, {cache: 'no-cache', credentials: 'omit'});
  if (!answer.ok || answer.redirected || answer.type !== 'basic') throw new Error(`${url}: ${answer.status}`);
  await cache.put(url, answer);
}

async function dropOlder() {
  for (const name of await caches.keys()) {
    if (name.startsWith(PREFIX) && name !== CACHE) await caches.delete(name);
  }
}

/**
 * @param {string} url
 * @param {Request} request
 */
async function cachedOrFetched(url, request) {
  const cached = await caches.match(url);
  return cached ?? fetch(request);
}
