/**
 * All of a survey that one phone knows: entries in, rows out. Pure; what is kept on disk is the
 * truth, this is its image in memory.
 */

import {readEntry} from './entry.js';
import {merge} from './merge.js';
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
    /** @type {Map<string, Map<string, Entry>>} record -> entry name -> entry */
    this.records = new Map();
    /** @type {Map<string, {seq: number | null, problem: string | null}>} entry name -> what base said */
    this.said = new Map();
    /** @type {Map<string, string>} set-aside entry -> the entry that says its record anew */
    this.mended = new Map();
    /** @type {Set<string>} entries made by a newer app, kept raw until this one is updated */
    this.newer = new Set();
    /** @type {Map<string, Merged>} */
    this.mergedRecords = new Map();
    /** @type {Map<string, Map<string, Row>> | null} kind -> record -> row */
    this.rowsByKind = null;
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
      const entries = this.records.get(entry.record) ?? new Map();
      this.records.set(entry.record, entries.set(entry.name, entry));
      this.mergedRecords.delete(entry.record);
      this.stale.add(entry.record);
      if (entry.body.mends) this.stale.add(entry.body.mends);
    }
  }

  /** Forget that base holds anything: it has gone back in time. */
  forgetBase() {
    for (const answer of this.said.values()) Object.assign(answer, {seq: null, problem: null});
    this.rowsByKind = null;
  }

  /**
   * @param {string} record
   * @returns {Merged | null} null where nothing is known of the record
   */
  merged(record) {
    const entries = this.records.get(record);
    if (!entries) return null;
    const known = this.mergedRecords.get(record) ?? merge(entries.values());
    this.mergedRecords.set(record, known);
    return known;
  }

  /**
   * @param {string} name of an entry
   * @returns {Entry | null}
   */
  entry(name) {
    for (const record of [name, ...this.records.keys()]) {
      const found = this.records.get(record)?.get(name);
      if (found) return found;
    }
    return null;
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
    return [...(current.get(kind)?.values() ?? [])].sort((a, b) => (a.madeAt < b.madeAt ? -1 : a.madeAt > b.madeAt ? 1 : 0));
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
    const rowsByKind = this.rowsByKind ?? new Map();
    const stale = this.rowsByKind ? this.stale : this.records.keys();
    for (const record of stale) {
      const merged = this.merged(record);
      if (!merged?.created) continue;
      const {kind} = merged.created.body;
      const rows = rowsByKind.get(kind) ?? new Map();
      rowsByKind.set(kind, rows);
      if (this.mended.has(record) && this.said.get(record)?.problem) rows.delete(record);
      else rows.set(record, this.#row(record, merged));
    }
    this.stale.clear();
    this.rowsByKind = rowsByKind;
    return rowsByKind;
  }

  /**
   * @param {string} record
   * @param {Merged} merged
   * @returns {Row}
   */
  #row(record, merged) {
    const names = [...(this.records.get(record)?.keys() ?? [])];
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
