/**
 * All of a survey that one phone knows: entries in, rows out. Pure; what is kept on disk is the
 * truth, this is its image in memory.
 */

import {readEntry} from './entry.js';
import {merge} from './merge.js';
import {splitName} from './names.js';
import {project} from './project.js';

/** @typedef {import('./entry.js').Entry} Entry */
/** @typedef {import('./merge.js').Merged} Merged */
/** @typedef {import('./merge.js').Version} Version */

/**
 * @typedef {object} KeptEntry an entry as it is kept on the phone
 * @property {string} device
 * @property {number} n
 * @property {string} text
 * @property {string} sha256 of the text
 * @property {number | null} seq its number at base, null while base is not known to hold it
 * @property {string | null} problem why base set it aside, and how to mend it
 */

/**
 * @typedef {object} Marks what stands beside a row's columns
 * @property {boolean} atBase base holds every entry of this record
 * @property {{field: string, versions: Version[]}[]} twoVersions
 * @property {{entry: string, problem: string}[]} setAside what base refused and is not mended yet
 * @property {string} madeBy crew record
 * @property {string} madeOn device
 * @property {string} madeAt UTC
 */

/** @typedef {Record<string, unknown> & {record: string} & Marks} Row */

export class Replica {
  constructor() {
    /** @type {Map<string, Entry>} by name */
    this.entries = new Map();
    /** @type {Map<string, Set<string>>} record -> names of its entries */
    this.records = new Map();
    /** @type {Map<string, {seq: number | null, problem: string | null}>} entry name -> what base said */
    this.said = new Map();
    /** @type {Map<string, string>} set-aside entry -> the entry that says its record anew */
    this.mended = new Map();
    /** @type {Set<string>} entries made by a newer app, kept raw until this one is updated */
    this.newer = new Set();
    /** @type {Map<string, Merged>} */
    this.mergedRecords = new Map();
    /** @type {Map<string, Map<string, Row>>} kind -> record -> row */
    this.rowsByKind = new Map();
    /** @type {Map<string, Row[]>} kind -> rows in order */
    this.sortedRows = new Map();
    /** @type {Set<string>} records whose rows are out of date */
    this.stale = new Set();
  }

  /**
   * Take entries in, new ones or ones that base has meanwhile answered. Any order, any number of times.
   * @param {Iterable<KeptEntry>} entries
   */
  take(entries) {
    for (const kept of entries) {
      const entry = readEntry(kept.device, kept.n, kept.text);
      if (!entry) {
        this.newer.add(`${kept.device}-${kept.n}`);
        continue;
      }
      this.said.set(entry.name, {seq: kept.seq, problem: kept.problem});
      if (entry.body.mends) this.mended.set(entry.body.mends, entry.name);
      this.entries.set(entry.name, entry);
      this.records.set(entry.record, (this.records.get(entry.record) ?? new Set()).add(entry.name));
      this.mergedRecords.delete(entry.record);
      this.stale.add(entry.record);
      if (entry.body.mends) this.stale.add(entry.body.mends);
    }
  }

  /**
   * @param {string} record
   * @returns {Merged | null} null where nothing is known of the record
   */
  merged(record) {
    const names = this.records.get(record);
    if (!names) return null;
    const known = this.mergedRecords.get(record) ?? merge([...names].flatMap((name) => this.entries.get(name) ?? []));
    this.mergedRecords.set(record, known);
    return known;
  }

  /**
   * Whether base is known to hold an entry.
   * @param {string} name
   */
  isAtBase(name) {
    return this.said.get(name)?.seq != null;
  }

  /**
   * The rows of one kind, in the order in which they were made.
   * @param {string} kind
   * @returns {Row[]}
   */
  rows(kind) {
    const current = this.#currentRows();
    const sorted = this.sortedRows.get(kind) ?? [...(current.get(kind)?.values() ?? [])].sort(inOrder);
    this.sortedRows.set(kind, sorted);
    return [...sorted];
  }

  /**
   * @param {string} kind
   * @param {string} record
   * @returns {Row | null}
   */
  row(kind, record) {
    return this.#currentRows().get(kind)?.get(record) ?? null;
  }

  #currentRows() {
    if (this.stale.size) this.sortedRows.clear();
    for (const record of this.stale) {
      const merged = this.merged(record);
      if (!merged?.created) continue;
      const {kind} = merged.created.body;
      const rows = this.rowsByKind.get(kind) ?? new Map();
      this.rowsByKind.set(kind, rows);
      if (this.mended.has(record) && this.said.get(record)?.problem) rows.delete(record);
      else rows.set(record, this.#row(record, merged));
    }
    this.stale.clear();
    return this.rowsByKind;
  }

  /**
   * @param {string} record
   * @param {Merged} merged
   * @returns {Row}
   */
  #row(record, merged) {
    const names = [...(this.records.get(record) ?? [])];
    const standing = new Set([record, ...Object.values(merged.heads).flat()]);
    const {made_by: madeBy, made_on: madeOn, made_at: madeAt, ...columns} = project(merged);
    const row = {
      ...columns,
      record,
      madeBy: String(madeBy),
      madeOn: String(madeOn),
      madeAt: String(madeAt),
      atBase: names.every((name) => this.isAtBase(name)),
      twoVersions: Object.entries(merged.twoVersions).map(([field, versions]) => ({field, versions})),
      setAside: names
        .filter((name) => standing.has(name) && this.said.get(name)?.problem)
        .map((entry) => ({entry, problem: String(this.said.get(entry)?.problem)})),
    };
    return row;
  }
}

/**
 * @param {Row} a
 * @param {Row} b
 */
function inOrder(a, b) {
  if (a.madeAt !== b.madeAt) return a.madeAt < b.madeAt ? -1 : 1;
  if (a.madeOn !== b.madeOn) return a.madeOn < b.madeOn ? -1 : 1;
  return splitName(a.record).n - splitName(b.record).n;
}
