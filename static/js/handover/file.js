/**
 * The other way out: all that this phone holds of a survey as one file, which the lead imports.
 *
 * Lines of JSON, gzipped where the browser can: a head, then {device, n, text} for every entry, then
 * {photo, base64} for every picture that base has not confirmed. Base reads it with
 * fieldlog/imports/notebook.py.
 */

import {everything, filed, keepFiled} from '../store/everything.js';
import {photoBytes} from '../store/photos.js';

/** @typedef {import('./opened.js').Notebook} Notebook */
/** @typedef {{blob: Blob, name: string, entries: number, photos: number}} NotebookFile */

export const FILE_VERSION = 1;
const SLICE = 0x6000; // bytes at a time into base64: a multiple of three

/**
 * @param {Pick<Notebook, 'connection' | 'deps' | 'info' | 'kept'>} notebook
 * @returns {Promise<NotebookFile>}
 */
export async function notebookFile({connection, deps, info, kept}) {
  const {entries, photos} = await everything(connection);
  const at = new Date(deps.now()).toISOString();
  const unsent = photos.filter((photo) => !photo.isSent);
  const head = {
    file: 'ergbook notebook', v: FILE_VERSION, app: deps.app, survey: info.survey, name: info.name, device: info.device, crew: info.crew,
    crew_name: info.crewName, store: kept.info.store, epoch: kept.info.epoch, made_at: at,
  };
  /** @type {BlobPart[]} */
  const parts = [line(head), ...entries.map(({device, n, text}) => line({device, n, text}))];
  let pictures = 0;
  for (const {sha256} of unsent) {
    const bytes = await photoBytes(connection, sha256);
    if (!bytes) continue;
    parts.push(line({photo: sha256, base64: base64(bytes)}));
    pictures += 1;
  }
  const plain = new Blob(parts, {type: 'application/octet-stream'});
  const blob = 'CompressionStream' in globalThis ? await zipped(plain) : plain;
  const name = `${[info.name, info.crewName, at.slice(0, 10)].map(plainName).filter(Boolean).join('-')}.ergbook`;
  return {blob, name, entries: entries.length, photos: pictures};
}

/**
 * Note that a file was saved: what it holds is no longer on this phone only.
 * @param {Pick<Notebook, 'connection' | 'deps' | 'kept'>} notebook
 * @returns {Promise<void>}
 */
export async function noteFiled({connection, deps, kept}) {
  await keepFiled(connection, {n: kept.counter.n, at: new Date(deps.now()).toISOString()});
}

/**
 * Whether everything said on this phone is in a file that was saved.
 * @param {Pick<Notebook, 'connection' | 'kept'>} notebook
 * @returns {Promise<boolean>}
 */
export async function isFiled({connection, kept}) {
  const last = await filed(connection);
  return last !== null && last.n >= kept.counter.n;
}

/** @param {object} value */
function line(value) {
  return `${JSON.stringify(value)}\n`;
}

/** @param {string} text */
function plainName(text) {
  return text.replace(/[^\p{L}\p{N}]+/gu, '-').replace(/^-+|-+$/g, '').slice(0, 40);
}

/** @param {ArrayBuffer} bytes */
function base64(bytes) {
  const all = new Uint8Array(bytes);
  let text = '';
  for (let start = 0; start < all.length; start += SLICE) {
    text += btoa(String.fromCharCode(...all.subarray(start, start + SLICE)));
  }
  return text;
}

/** @param {Blob} plain */
async function zipped(plain) {
  return new Response(plain.stream().pipeThrough(new CompressionStream('gzip'))).blob();
}
