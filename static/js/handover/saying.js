/** What one save says: the record, its photos, and what hangs on a record that is said anew. Pure. */

import {sayChange} from '../ledger/edit.js';

/** @typedef {import('../ledger/replica.js').Replica} Replica */
/** @typedef {import('../ledger/edit.js').Said} Said */

/**
 * @typedef {object} PhotoTaken
 * @property {ArrayBuffer} bytes JPEG
 * @property {number} width pixels
 * @property {number} height pixels
 * @property {ArrayBuffer} thumbnail JPEG
 * @property {number} [bearing_deg] true bearing that the camera looked along
 * @property {string} [taken_at] UTC
 */

/**
 * @param {Replica} replica
 * @param {object} save
 * @param {string} save.kind
 * @param {Record<string, unknown>} save.set
 * @param {string} [save.record]
 * @param {(PhotoTaken & {kept: {sha256: string}})[]} save.photos
 * @returns {Said[]} the record itself first, if anything is said of it
 */
export function saidInSave(replica, {kind, set, record, photos}) {
  /** @type {Said[]} */
  const said = [];
  const main = record ? sayChange(replica, kind, record, set) : {kind, set: present(set)};
  if (main) said.push(main);
  const isNew = Boolean(main && !main.record);
  if (main?.mends) said.push(...referring(replica, main.mends));
  for (const photo of photos) {
    const {kept, bytes, width, height, bearing_deg, taken_at} = photo;
    const values = {sha256: kept.sha256, bytes: bytes.byteLength, width_px: width, height_px: height, bearing_deg, taken_at};
    said.push({kind: 'photo', set: present({...(isNew ? {} : {observation: record}), ...values}), ...(isNew ? {refers: {observation: 0}} : {})});
  }
  return said;
}

/**
 * The changes that make whatever names a record name instead the record of the save's first entry.
 * @param {Replica} replica
 * @param {string} record
 * @returns {Said[]}
 */
function referring(replica, record) {
  const named = [['photo', 'observation'], ['observation', 'check_of']].flatMap(([kind, field]) => (
    replica.rows(kind).filter((row) => row[field] === record).map((row) => ({kind, field, row}))
  ));
  return named.flatMap(({kind, field, row}) => {
    const change = sayChange(replica, kind, row.record, {[field]: null});
    return change ? [{...change, refers: {[field]: 0}}] : [];
  });
}

/** @param {Record<string, unknown>} values */
function present(values) {
  return Object.fromEntries(Object.entries(values).filter(([, value]) => value !== null && value !== undefined));
}
