/** What an entry must say, and over what, when somebody saves values. Pure. */

import {canonical} from './merge.js';

/** @typedef {import('./replica.js').Replica} Replica */

/**
 * @typedef {object} Said what one entry is going to say, before it has a number
 * @property {string} kind
 * @property {Record<string, unknown>} set
 * @property {string} [record] missing: the entry creates its record
 * @property {Record<string, string[]>} [over]
 * @property {string[]} [saw]
 * @property {string} [mends]
 * @property {Record<string, number>} [refers] field -> index, in the same save, of the entry whose record it names
 */

/**
 * A change of a record that is here: only what differs, over everything the editor has seen.
 * Null where nothing differs.
 *
 * What base has set aside of the record is said again with it, so that saving mends. Names that
 * base may not hold are listed together with what they themselves replaced: whether or not base
 * took them, the same heads remain.
 * @param {Replica} replica
 * @param {string} kind
 * @param {string} record
 * @param {Record<string, unknown>} values
 * @returns {Said | null}
 */
export function sayChange(replica, kind, record, values) {
  const merged = replica.merged(record);
  if (!merged?.created || merged.created.body.kind !== kind) throw new RangeError(`there is no ${kind} ${record} here`);
  const before = new Map(Object.entries(merged.values));
  if (replica.said.get(record)?.problem) return sayAnew(kind, record, before, values);
  /** @type {Map<string, unknown>} */
  const said = new Map();
  for (const [field, value] of Object.entries(values)) {
    const differs = canonical(before.get(field) ?? null) !== canonical(value ?? null);
    if (differs || Object.hasOwn(merged.twoVersions, field)) said.set(field, value ?? null);
  }
  if (!said.size) return null;
  for (const [field, names] of Object.entries(merged.heads)) {
    const isRefused = names.some((name) => replica.said.get(name)?.problem);
    if (isRefused && !said.has(field)) said.set(field, before.get(field));
  }
  const heads = new Map(Object.entries(merged.heads));
  return {
    kind,
    record,
    set: Object.fromEntries(said),
    over: Object.fromEntries([...said.keys()].map((field) => [field, replaced(replica, field, heads.get(field) ?? [])])),
    saw: seen(replica, merged.frontier),
  };
}

/**
 * A record whose creation base has set aside is said anew, whole, as another record.
 * @param {string} kind
 * @param {string} record
 * @param {Map<string, unknown>} before
 * @param {Record<string, unknown>} values
 * @returns {Said | null}
 */
function sayAnew(kind, record, before, values) {
  const all = {...Object.fromEntries(before), ...values};
  const isSame = canonical(all) === canonical(Object.fromEntries(before));
  if (isSame) return null;
  return {kind, set: Object.fromEntries(Object.entries(all).filter(([, value]) => value != null)), mends: record};
}

/**
 * @param {Replica} replica
 * @param {string} field
 * @param {string[]} names
 */
function replaced(replica, field, names) {
  return withOlder(replica, names, (body) => new Map(Object.entries(body.over ?? {})).get(field) ?? []);
}

/**
 * @param {Replica} replica
 * @param {string[]} names
 */
function seen(replica, names) {
  return withOlder(replica, names, (body) => body.saw ?? []);
}

/**
 * The names, and for those that base is not known to hold, what they listed, and so on.
 * @param {Replica} replica
 * @param {string[]} names
 * @param {(body: import('./entry.js').Body) => string[]} listed
 * @returns {string[]}
 */
function withOlder(replica, names, listed) {
  /** @type {Set<string>} a set also meets what is added while it is walked */
  const all = new Set(names);
  for (const name of all) {
    if (replica.isAtBase(name)) continue;
    const entry = replica.entries.get(name);
    if (entry) listed(entry.body).forEach((older) => all.add(older));
  }
  return [...all];
}
