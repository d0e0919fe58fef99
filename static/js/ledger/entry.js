/**
 * An entry: one thing said about a survey, written once and never changed. Mirror of
 * fieldlog/ledger/entry.py. Its text is kept byte for byte on the phone, on the wire and at base,
 * so that no two JSON writers ever have to agree.
 */

import {entryName} from './names.js';
import {WRITTEN, isKnown, upcast} from './protocol.js';

/**
 * @typedef {object} Body what an entry's text says
 * @property {number} v
 * @property {string} app
 * @property {string} by crew record of whoever says it
 * @property {string} survey
 * @property {string} kind
 * @property {string} [record] missing in the entry that creates its record
 * @property {Record<string, unknown>} set field -> value; null takes a value away
 * @property {Record<string, string[]>} [over] field -> names of the entries that this one replaces
 * @property {string[]} [saw] names of the heads known of the record
 * @property {string} hlc
 * @property {number | null} offset milliseconds: store time minus this device's time, as last learnt
 * @property {string} made_at UTC
 * @property {string} [mends] name of the set-aside entry whose record this one says anew
 * @property {string} [was] the name that this entry had before its device took a new id
 */

/**
 * @typedef {object} Entry
 * @property {string} device
 * @property {number} n
 * @property {string} text
 * @property {string} name DEVICE-n
 * @property {Body} body
 * @property {string} record the record it speaks of: the one it creates, or the one it names
 * @property {boolean} creates
 */

/**
 * The entry of a text; null where its protocol version is newer than this app.
 * @param {string} device
 * @param {number} n
 * @param {string} text
 * @returns {Entry | null}
 */
export function readEntry(device, n, text) {
  const raw = JSON.parse(text);
  if (!isKnown(raw.v)) return null;
  /** @type {Body} */
  const body = upcast(raw);
  const name = entryName(device, n);
  return {device, n, text, name, body, record: body.record || name, creates: !body.record};
}

/**
 * The text of a new entry. One that creates its record has no record, over and saw.
 * @param {object} said
 * @param {string} said.app
 * @param {string} said.by
 * @param {string} said.survey
 * @param {string} said.kind
 * @param {Record<string, unknown>} said.set
 * @param {string} said.hlc
 * @param {number} said.madeAtMs
 * @param {number | null} said.offsetMs
 * @param {string} [said.record]
 * @param {Record<string, string[]>} [said.over]
 * @param {string[]} [said.saw]
 * @param {string} [said.mends]
 * @returns {string}
 */
export function writeText(said) {
  /** @type {Body} */
  const body = {
    v: WRITTEN,
    app: said.app,
    by: said.by,
    survey: said.survey,
    kind: said.kind,
    ...(said.record ? {record: said.record} : {}),
    set: said.set,
    ...(said.record ? {over: said.over ?? {}, saw: said.saw ?? []} : {}),
    ...(said.mends ? {mends: said.mends} : {}),
    hlc: said.hlc,
    offset: said.offsetMs,
    made_at: new Date(said.madeAtMs).toISOString(),
  };
  return JSON.stringify(body);
}

/**
 * SHA-256 in hexadecimal of a text in UTF-8, or of bytes.
 * @param {SubtleCrypto} subtle
 * @param {string | ArrayBuffer} content
 * @returns {Promise<string>}
 */
export async function hashOf(subtle, content) {
  const bytes = typeof content === 'string' ? new TextEncoder().encode(content) : content;
  const digest = await subtle.digest('SHA-256', bytes);
  return [...new Uint8Array(digest)].map((byte) => byte.toString(16).padStart(2, '0')).join('');
}

/**
 * What decides the provisional value among versions: (hlc, device, n), highest first.
 * @param {Entry} a
 * @param {Entry} b
 * @returns {number}
 */
export function highestFirst(a, b) {
  if (a.body.hlc !== b.body.hlc) return a.body.hlc < b.body.hlc ? 1 : -1;
  if (a.device !== b.device) return a.device < b.device ? 1 : -1;
  return b.n - a.n;
}
