/**
 * A notebook that was found on two phones takes a new device id. What base has not taken is said
 * again under it, references among these entries rewritten and the old name kept in each; what
 * base has stays as it is. The old texts are kept aside, unread.
 */

import {tick} from '../ledger/clock.js';
import {hashOf} from '../ledger/entry.js';
import {entryName} from '../ledger/names.js';
import {SHEETS} from '../sheet/declared.js';

/** @typedef {import('./open.js').Connection} Connection */
/** @typedef {import('./deps.js').Deps} Deps */
/** @typedef {import('./load.js').Kept} Kept */
/** @typedef {import('./load.js').Info} Info */
/** @typedef {import('../ledger/entry.js').Body} Body */

/**
 * @param {Connection} connection
 * @param {Deps} deps
 * @param {Kept} held as it was before
 * @param {Info} info with the new device id
 * @returns {Promise<void>}
 */
export async function resaveUnsent(connection, deps, held, info) {
  const old = held.info.device;
  const unsent = held.entries.filter((each) => each.device === old && each.seq === null).sort((a, b) => a.n - b.n);
  const renamed = new Map(unsent.map(({n}, index) => [entryName(old, n), entryName(info.device, index + 1)]));
  let {hlc} = held.counter;
  /** @type {import('../ledger/replica.js').KeptEntry[]} */
  const entries = [];
  for (const [index, {n, text}] of unsent.entries()) {
    hlc = tick(hlc, Math.floor(deps.now()));
    const body = {...renameIn(JSON.parse(text), renamed), hlc, was: entryName(old, n)};
    const anew = JSON.stringify(body);
    entries.push({
      device: info.device, n: index + 1, text: anew, sha256: await hashOf(deps.crypto.subtle, anew), seq: null, problem: null,
    });
  }
  await connection.transact(['meta', 'ledger', 'queue', 'drafts'], 'readwrite', (transaction) => {
    const [meta, ledger, queue, drafts] = ['meta', 'ledger', 'queue', 'drafts'].map((name) => transaction.objectStore(name));
    queue.clear();
    drafts.put(unsent, `renewed ${old}`);
    for (const {n} of unsent) ledger.delete([old, n]);
    for (const entry of entries) {
      ledger.put(entry);
      queue.put({n: entry.n, madeAt: Date.parse(JSON.parse(entry.text).made_at)});
    }
    meta.put(info, 'info');
    meta.put({device: info.device, n: entries.length, hlc}, 'counter');
    // From the start: base may hold, under the old id, what the other phone said.
    meta.put(0, 'cursor');
  }, {strict: true});
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
