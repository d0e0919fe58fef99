/** What others said, from base: consecutive pages, each kept together with its cursor. */

import {hashOf} from '../ledger/entry.js';
import {keepChanges} from '../store/answers.js';
import {Problem} from '../store/problem.js';
import {NewEpoch, NoConnection, Stopped} from './failures.js';
import {problemIn} from './api.js';
import {stopForked} from './push.js';
import {singly} from './runs.js';

/** @typedef {import('./runner.js').Desk} Desk */
/** @typedef {import('../store/answers.js').Change} Change */

const LIMIT = 500;

/**
 * Pull until the newest entry is here.
 * @param {Desk} desk
 * @param {(done: number, of: number) => void} [onProgress]
 * @returns {Promise<void>}
 */
export async function pull(desk, onProgress = () => {}) {
  for (;;) {
    const after = desk.kept.cursor;
    const {answer, changes} = await page(desk.api, after, desk.kept.info.epoch);
    const {last} = answer.body;
    await desk.heard(answer);
    const hashed = await Promise.all(changes.map(async (each) => (
      {...each, sha256: each.text === undefined ? '' : await hashOf(desk.deps.crypto.subtle, each.text)}
    )));
    if (changes.length) {
      const storeTimeMs = Date.parse(answer.body.time);
      const {entries, cursor, counter, foreign, changed} = await keepChanges(desk.connection, desk.kept, {after, storeTimeMs, changes: hashed});
      if (foreign) await stopForked(desk);
      if (changed) throw new Stopped(changedProblem(changed));
      Object.assign(desk.kept, {cursor, counter});
      desk.take(entries);
    }
    onProgress(desk.kept.cursor, last);
    if (desk.kept.cursor >= last) return;
  }
}

/**
 * What base holds of another device, among the entries after a cursor: number -> hash of the text.
 * @param {import('./api.js').StoreApi} api
 * @param {number} after
 * @param {string} device
 * @returns {Promise<Map<number, string>>}
 */
export async function hashesAtBase(api, after, device) {
  /** @type {Map<number, string>} */
  const hashes = new Map();
  for (let cursor = after; ;) {
    const {answer, changes} = await page(api, cursor, api.info().epoch);
    for (const each of changes) {
      if (each.device !== device || each.text === undefined) continue;
      hashes.set(each.n, await hashOf(api.deps.crypto.subtle, each.text));
    }
    cursor += changes.length;
    if (cursor >= answer.body.last) return hashes;
  }
}

/**
 * @param {import('./api.js').StoreApi} api
 * @param {number} after
 * @param {string} epoch
 */
async function page(api, after, epoch) {
  const answer = await api.ask('GET', `changes?after=${after}&limit=${LIMIT}`);
  if (answer.status >= 400) throw new Stopped(problemIn(answer));
  if (answer.body.epoch !== epoch) throw new NewEpoch(String(answer.body.epoch));
  return {answer, changes: consecutive(answer.body, after)};
}

/** @param {string} name of an entry */
function changedProblem(name) {
  return new Problem(
    'Base has changed an entry that this phone holds',
    `entry ${name} reads otherwise there; entries never change`,
    'What is on this phone stays as it is. Tell whoever runs the store to run: ergbook check',
  );
}

/**
 * The page's entries, which must follow on from the cursor without a gap.
 * @param {Record<string, any>} body
 * @param {number} after
 * @returns {Change[]}
 */
function consecutive(body, after) {
  const {through, last} = body;
  const entries = Array.isArray(body.entries) ? singly(body.entries) : null;
  if (!entries || !Number.isInteger(through) || !Number.isInteger(last)) {
    throw new NoConnection('the answer is not a list of changes');
  }
  const isWhole = entries.every((each, index) => each.seq === after + 1 + index)
    && through === after + entries.length && last >= through && (entries.length > 0 || last === after);
  if (isWhole) return entries;
  throw new Stopped(new Problem(
    'Base left out an entry',
    `after number ${after} of the survey the next must come, and it did not`,
    'What is on this phone stays. Tell whoever runs the store to run: ergbook check',
  ));
}
