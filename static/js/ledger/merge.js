/**
 * What the entries of one record add up to, whatever the order in which they arrived; the mirror
 * of fieldlog/ledger/merge.py. Merging goes by what the editor had seen, never by a clock: the
 * heads of a field are its entries that no other entry lists in `over`. Several heads with
 * different values are two versions, kept until a person chooses.
 */

import {highestFirst} from './entry.js';

/** @typedef {import('./entry.js').Entry} Entry */
/** @typedef {{entry: string, value: unknown}} Version one of several values of a field */

/**
 * @typedef {object} Merged
 * @property {Entry | null} created the creating entry, null while it has not arrived
 * @property {Record<string, unknown>} values
 * @property {Record<string, string[]>} heads what an editor lists in `over`
 * @property {string[]} frontier entries that no other has seen: what an editor lists in `saw`
 * @property {Record<string, Version[]>} twoVersions field -> its versions, highest first
 * @property {Record<string, number | null>} offsetsMs what the entry whose value of a field is shown knew of its device's clock
 */

const CROSSED_OUT = 'crossed_out';

/**
 * Merge all entries of one record; the answer does not depend on their order.
 * @param {Iterable<Entry>} entries
 * @returns {Merged}
 */
export function merge(entries) {
  const byName = new Map([...entries].map((entry) => [entry.name, entry]));
  const ranked = [...byName.values()].sort(highestFirst);
  const heads = headsOf(ranked);
  const values = new Map([...heads].map(([field, rows]) => [field, rows[0].body.set[field]]));
  /** @type {Map<string, Version[]>} */
  const twoVersions = new Map();
  for (const [field, rows] of heads) {
    if (new Set(rows.map((row) => canonical(row.body.set[field]))).size < 2) continue;
    twoVersions.set(field, rows.map((row) => ({entry: row.name, value: row.body.set[field]})));
  }
  const unseen = crossOutAgainstEdits(heads, byName);
  if (unseen.length) {
    twoVersions.set(CROSSED_OUT, unseen);
    values.set(CROSSED_OUT, unseen[0].value);
  }
  const seen = new Set(ranked.flatMap((entry) => entry.body.saw ?? []));
  return {
    created: ranked.find((entry) => entry.creates) ?? null,
    values: Object.fromEntries(values),
    heads: Object.fromEntries([...heads].map(([field, rows]) => [field, rows.map((row) => row.name)])),
    frontier: [...byName.keys()].filter((name) => !seen.has(name)).sort(),
    twoVersions: Object.fromEntries(twoVersions),
    offsetsMs: Object.fromEntries([...heads].map(([field, rows]) => [field, rows[0].body.offset ?? null])),
  };
}

/**
 * Field -> its heads, highest (hlc, device) first.
 * @param {Entry[]} ranked
 */
function headsOf(ranked) {
  const replaced = new Set();
  for (const entry of ranked) {
    for (const [field, over] of Object.entries(entry.body.over ?? {})) {
      for (const name of over) replaced.add(`${name} ${field}`);
    }
  }
  /** @type {Map<string, Entry[]>} */
  const heads = new Map();
  for (const entry of ranked) {
    for (const field of Object.keys(entry.body.set)) {
      if (replaced.has(`${entry.name} ${field}`)) continue;
      heads.set(field, [...(heads.get(field) ?? []), entry]);
    }
  }
  return heads;
}

/**
 * Standing cross outs and the edits that did not see them, highest first; empty where none.
 * @param {Map<string, Entry[]>} heads
 * @param {Map<string, Entry>} byName
 * @returns {Version[]}
 */
function crossOutAgainstEdits(heads, byName) {
  const standing = (heads.get(CROSSED_OUT) ?? []).filter((row) => isStanding(row.body.set[CROSSED_OUT]));
  if (!standing.length || byName.size < 3) return [];
  const edits = new Set([...heads].flatMap(([field, rows]) => (field === CROSSED_OUT ? [] : rows)));
  /** @type {Set<Entry>} */
  const open = new Set();
  for (const cross of standing) {
    const belowCross = ancestors(cross, byName);
    for (const edit of edits) {
      if (edit === cross || belowCross.has(edit.name) || ancestors(edit, byName).has(cross.name)) continue;
      open.add(cross).add(edit);
    }
  }
  return [...open].sort(highestFirst).map((row) => ({entry: row.name, value: row.body.set[CROSSED_OUT] ?? null}));
}

/**
 * All entries that `entry` had seen, directly or through what those had seen.
 * @param {Entry} entry
 * @param {Map<string, Entry>} byName
 */
function ancestors(entry, byName) {
  /** @type {Set<string>} */
  const seen = new Set();
  const waiting = [...(entry.body.saw ?? [])];
  for (let name = waiting.pop(); name !== undefined; name = waiting.pop()) {
    if (seen.has(name)) continue;
    seen.add(name);
    waiting.push(...(byName.get(name)?.body.saw ?? []));
  }
  return seen;
}

/**
 * Whether a value of crossed_out is a reason: Python's truth of a JSON value.
 * @param {unknown} value
 */
function isStanding(value) {
  if (Array.isArray(value)) return value.length > 0;
  if (typeof value === 'object' && value !== null) return Object.keys(value).length > 0;
  return Boolean(value);
}

/**
 * One text for one value, in both languages: keys sorted.
 * @param {unknown} value
 * @returns {string}
 */
export function canonical(value) {
  return JSON.stringify(value, (_key, inner) => {
    if (typeof inner !== 'object' || inner === null || Array.isArray(inner)) return inner;
    return Object.fromEntries(Object.entries(inner).sort(([a], [b]) => (a < b ? -1 : 1)));
  });
}
