/**
 * A phone that joins again takes a new device id. What base lacks is said again under it,
 * references among these entries rewritten and the old name kept in each; what base has stays as
 * it is. The old texts are kept aside, unread.
 */

import {tick} from '../ledger/clock.js';
import {hashOf} from '../ledger/entry.js';
import {entryName} from '../ledger/names.js';
import {SHEETS} from '../sheet/declared.js';
import {load} from './load.js';
import {Problem} from './problem.js';

/** @typedef {import('./open.js').Connection} Connection */
/** @typedef {import('./deps.js').Deps} Deps */
/** @typedef {import('../ledger/replica.js').KeptEntry} KeptEntry */
/** @typedef {import('./load.js').Info} Info */
/** @typedef {import('../ledger/entry.js').Body} Body */

const STORES = ['meta', 'ledger', 'queue', 'drafts'];
const TRIES = 20;

/**
 * @param {Connection} connection
 * @param {Deps} deps
 * @param {object} renewal
 * @param {Info} renewal.info with the new device id
 * @param {(entry: KeptEntry) => boolean} renewal.isAtBase
 * @returns {Promise<void>}
 */
export async function sayAgain(connection, deps, {info, isAtBase}) {
  for (let tries = 0; tries < TRIES; tries += 1) {
    const held = await load(connection);
    if (!held) throw new Problem('Not joined: the notebook is gone', '', 'Join once more.');
    const old = held.info.device;
    const lacking = held.entries.filter((each) => each.device === old && !isAtBase(each)).sort((a, b) => a.n - b.n);
    const {entries, hlc} = await write(deps, lacking, {device: info.device, hlc: held.counter.hlc});
    const isDone = await connection.transact(STORES, 'readwrite', (transaction, done) => {
      const [meta, ledger, queue, drafts] = STORES.map((name) => transaction.objectStore(name));
      const counter = meta.get('counter');
      counter.onsuccess = () => {
        // Another page has saved meanwhile: that must be said again too.
        if (counter.result.n !== held.counter.n || counter.result.device !== held.counter.device) return;
        queue.clear();
        if (lacking.length) drafts.put(lacking, `renewed ${old}`);
        for (const {n} of lacking) ledger.delete([old, n]);
        for (const entry of entries) {
          ledger.put(entry);
          queue.put({n: entry.n, madeAt: Date.parse(JSON.parse(entry.text).made_at)});
        }
        meta.put(info, 'info');
        meta.put({device: info.device, n: entries.length, hlc}, 'counter');
        done(true);
      };
    }, {strict: true});
    if (isDone) return;
  }
  throw new Problem('Not joined: another page keeps saving', '', 'Close the other Ergbook pages, then join once more.');
}

/**
 * @param {Deps} deps
 * @param {KeptEntry[]} lacking
 * @param {{device: string, hlc: string}} next
 */
async function write(deps, lacking, next) {
  const renamed = new Map(lacking.map(({device, n}, index) => [entryName(device, n), entryName(next.device, index + 1)]));
  let {hlc} = next;
  /** @type {KeptEntry[]} */
  const entries = [];
  for (const [index, {device, n, text: before}] of lacking.entries()) {
    hlc = tick(hlc, Math.floor(deps.now()));
    const text = JSON.stringify({...renameIn(JSON.parse(before), renamed), hlc, was: entryName(device, n)});
    const sha256 = await hashOf(deps.crypto.subtle, text);
    entries.push({device: next.device, n: index + 1, text, sha256, seq: null, problem: null});
  }
  return {entries, hlc};
}

/**
 * @param {Body} body
 * @param {Map<string, string>} renamed
 * @returns {Body}
 */
function renameIn(body, renamed) {
  /** @param {string} name */
  const now = (name) => renamed.get(name) ?? name;
  const sheet = SHEETS[body.kind];
  const references = new Set(sheet?.fields.filter(({type}) => type === 'reference').map(({name}) => name));
  const set = Object.entries(body.set).map(([field, value]) => (
    [field, references.has(field) && typeof value === 'string' ? now(value) : value]
  ));
  const over = Object.entries(body.over ?? {}).map(([field, names]) => [field, names.map(now)]);
  return {
    ...body,
    set: Object.fromEntries(set),
    ...(body.record ? {record: now(body.record), over: Object.fromEntries(over), saw: (body.saw ?? []).map(now)} : {}),
    ...(body.mends ? {mends: now(body.mends)} : {}),
  };
}
