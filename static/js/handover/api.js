/**
 * Talking to the store. Nothing counts as its answer that is not JSON and, after joining, does
 * not carry the id of the store that was joined.
 */

import {Problem} from '../store/problem.js';
import {NoConnection, Refused, WrongStore} from './failures.js';

/** @typedef {import('../store/deps.js').Deps} Deps */
/** @typedef {import('../store/load.js').Info} Info */
/** @typedef {{status: number, body: Record<string, any>, sentAtMs: number, gotAtMs: number}} Answer */

const TIMEOUT_MS = 30_000;

/**
 * @typedef {object} Request
 * @property {string} [token]
 * @property {unknown} [json]
 * @property {string} [text] of the media type `type`
 * @property {string} [type]
 * @property {ArrayBuffer} [bytes] part of a photo
 * @property {Record<string, string>} [headers] beside the usual ones
 * @property {boolean} [gzip]
 * @property {number} [timeoutMs]
 * @property {AbortSignal} [signal]
 */

/**
 * One request; NoConnection where nothing comes back that could be the store's.
 * @param {Deps} deps
 * @param {string} method
 * @param {string} path below /api/v1/
 * @param {Request} [request]
 * @returns {Promise<Answer>}
 */
export async function ask(deps, method, path, request = {}) {
  const sentAtMs = deps.now();
  const {response, text} = await send(deps, method, path, request);
  const gotAtMs = deps.now();
  const type = response.headers.get('Content-Type') ?? '';
  if (!/^application\/(problem\+)?json\b/.test(type)) throw new NoConnection('something other than the store answered');
  let body;
  try {
    body = JSON.parse(text);
  } catch {
    throw new NoConnection('the answer was cut off');
  }
  if (typeof body !== 'object' || body === null) throw new NoConnection('something other than the store answered');
  return {status: response.status, body, sentAtMs, gotAtMs};
}

/**
 * @param {Deps} deps
 * @param {string} method
 * @param {string} path
 * @param {Request} request
 */
async function send(deps, method, path, {token, json, text: plain, type, bytes, gzip, headers: more = {}, timeoutMs = TIMEOUT_MS, signal}) {
  /** @type {Record<string, string>} */
  const headers = {Accept: 'application/json', ...more};
  if (token) headers.Authorization = `Bearer ${token}`;
  if (json !== undefined) headers['Content-Type'] = 'application/json';
  if (plain !== undefined) headers['Content-Type'] = type ?? 'text/plain';
  if (bytes) headers['Content-Type'] = 'application/octet-stream';
  /** @type {BodyInit | undefined} */
  let body = bytes ?? plain ?? (json === undefined ? undefined : JSON.stringify(json));
  if (gzip && typeof body === 'string' && 'CompressionStream' in globalThis) {
    body = await zipped(body);
    headers['Content-Encoding'] = 'gzip';
  }
  const stopper = new AbortController();
  let timedOut = false;
  const timer = deps.setTimer(() => {
    timedOut = true;
    stopper.abort();
  }, timeoutMs);
  const stop = () => stopper.abort();
  signal?.addEventListener('abort', stop);
  try {
    const response = await deps.fetch(`${deps.base}/api/v1/${path}`, {
      method, headers, body, signal: stopper.signal, redirect: 'error', cache: 'no-store', credentials: 'omit',
    });
    return {response, text: method === 'HEAD' ? '' : await response.text()};
  } catch (error) {
    throw new NoConnection(timedOut ? 'base did not answer in time' : 'base cannot be reached', {timedOut});
  } finally {
    deps.clearTimer(timer);
    signal?.removeEventListener('abort', stop);
  }
}

/** @param {string} text */
async function zipped(text) {
  const stream = new Blob([text]).stream().pipeThrough(new CompressionStream('gzip'));
  return new Response(stream).arrayBuffer();
}

/**
 * The problem that an answer of the store states.
 * @param {Answer} answer
 * @returns {Problem}
 */
export function problemIn({status, body}) {
  const title = String(body.title ?? `the store answered ${status}`);
  const detail = String(body.detail ?? '');
  return new Problem(title, detail.includes(title) ? '' : detail, String(body.mend ?? ''), status);
}

/** The store, as a joined phone talks to it. */
export class StoreApi {
  /**
   * @param {Deps} deps
   * @param {() => Info} info as it stands: token and epoch may change
   * @param {AbortSignal} signal ends what is under way
   */
  constructor(deps, info, signal) {
    this.deps = deps;
    this.info = info;
    this.signal = signal;
  }

  /**
   * One request as this phone. Returns answers of 2xx that carry the store's id, and 4xx that a
   * caller has to deal with; everything else is thrown by kind.
   * @param {string} method
   * @param {string} path below this survey
   * @param {Request} [request]
   * @returns {Promise<Answer>}
   */
  async ask(method, path, request = {}) {
    const {survey, token, store} = this.info();
    const answer = await ask(this.deps, method, `surveys/${survey}/${path}`, {...request, token, signal: this.signal});
    const {status, body} = answer;
    if (typeof body.store === 'string' && body.store !== store) throw new WrongStore();
    if (status >= 500 || status === 408 || status === 429) throw new NoConnection(problemIn(answer).message);
    if (status < 400) {
      if (body.store !== store) throw new NoConnection('something other than the store answered');
      return answer;
    }
    if (body.store === undefined) await this.health(); // a refusal counts only from the store itself
    if (status === 401 || status === 403) throw new Refused(problemIn(answer));
    return answer;
  }

  /**
   * Who answers at the address: throws unless it is the store that was joined.
   * @returns {Promise<{epoch: string}>}
   */
  async health() {
    const {body, status} = await ask(this.deps, 'GET', 'health', {signal: this.signal});
    if (typeof body.store !== 'string' || status >= 400) throw new NoConnection('something other than the store answered');
    if (body.store !== this.info().store) throw new WrongStore();
    return {epoch: String(body.epoch)};
  }

  /**
   * How much of a photo base holds. Only an answer that names the store in its headers counts: any
   * proxy can answer 200.
   * @param {string} sha256
   * @returns {Promise<{isComplete: boolean, offset: number}>}
   */
  async photoAt(sha256) {
    const {survey, token, store} = this.info();
    const path = `surveys/${survey}/photos/${sha256}`;
    const {response} = await send(this.deps, 'HEAD', path, {token, signal: this.signal});
    if (response.headers.get('Ergbook-Store') !== store) return {isComplete: false, offset: 0};
    return {isComplete: response.status === 200, offset: Number(response.headers.get('Upload-Offset')) || 0};
  }

  /**
   * A photo's bytes from base, or its thumbnail's.
   * @param {string} sha256
   * @param {boolean} [isSmall]
   * @returns {Promise<Blob>}
   */
  async photo(sha256, isSmall = false) {
    const {survey, token} = this.info();
    const path = `surveys/${survey}/photos/${sha256}${isSmall ? '/small' : ''}`;
    const response = await this.deps.fetch(`${this.deps.base}/api/v1/${path}`, {
      headers: {Authorization: `Bearer ${token}`}, redirect: 'error', credentials: 'omit',
    }).catch(() => null);
    if (!response?.ok) throw new NoConnection('the photo cannot be had from base now');
    return response.blob();
  }
}
