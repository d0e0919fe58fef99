/** Merges and projects texts in JavaScript, in the shape of histories.added_up. */

import {readEntry} from '../../static/js/ledger/entry.js';
import {merge} from '../../static/js/ledger/merge.js';
import {project} from '../../static/js/ledger/project.js';

/** @param {{device: string, n: number, text: string}[]} texts */
export function addedUp(texts) {
  const entries = texts.map(({device, n, text}) => readEntry(device, n, text)).filter((entry) => entry !== null);
  const {created, values, heads, frontier, twoVersions, offsetsMs} = merge(entries);
  const row = created ? project({created, values, heads, frontier, twoVersions, offsetsMs}) : null;
  return {created: created?.name ?? null, values, heads, frontier, two_versions: twoVersions, row};
}
