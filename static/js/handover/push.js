/** Own entries to base, batch by batch; what base answers for each is kept before the next goes. */

import {keepAnswers, nextBatch, requeueFrom} from '../store/answers.js';
import {changeInfo} from '../store/load.js';
import {WRITTEN} from '../ledger/protocol.js';
import {Problem} from '../store/problem.js';
import {NewEpoch, NoConnection, Stopped} from './failures.js';
import {problemIn} from './api.js';
import {COLUMNS_TYPE, toColumns} from './columns.js';
import {singly} from './runs.js';

/** @typedef {import('./runner.js').Desk} Desk */
/** @typedef {import('../store/answers.js').Result} Result */

const LARGEST = {entries: 500, bytes: 256 * 1024};
const STATUSES = new Set(['stored', 'already', 'set_aside', 'forked']);

/** How much goes into one batch: halved where a batch timed out, doubled where it passed. */
export class BatchSize {
  constructor() {
    this.limits = {...LARGEST};
    this.entries = LARGEST.entries;
  }

  get now() {
    return {entries: Math.min(this.entries, this.limits.entries), bytes: this.limits.bytes};
  }

  /** @param {number} tried entries in the batch that did not get through */
  shrink(tried) {
    this.entries = Math.max(1, Math.floor(tried / 2));
  }

  grow() {
    this.entries = Math.min(LARGEST.entries, this.entries * 2);
  }

  /** @param {{entries?: unknown, bytes?: unknown} | undefined} limits as the store states them */
  obey(limits) {
    if (Number(limits?.entries) >= 1) this.limits.entries = Math.min(LARGEST.entries, Number(limits?.entries));
    if (Number(limits?.bytes) >= 1) this.limits.bytes = Math.min(LARGEST.bytes, Number(limits?.bytes));
  }
}

/**
 * Send until nothing waits.
 * @param {Desk} desk
 * @param {BatchSize} size kept from one hand-over to the next
 * @returns {Promise<void>}
 */
export async function push(desk, size) {
  const {connection} = desk;
  let lowest = Infinity;
  for (;;) {
    const {device} = desk.kept.info;
    const batch = await nextBatch(connection, device, size.now);
    if (!batch.length) return;
    const first = batch[0].n;
    const answer = await sendBatch(desk, size, batch);
    if (answer.status === 409) {
      const through = answer.body.received_through;
      if (!Number.isInteger(through) || through + 1 >= first) await checkEpoch(desk, answer);
      // Each time it must start lower, or two answers that contradict each other would go on for ever.
      if (through + 1 >= Math.min(lowest, first)) throw new Stopped(problemIn(answer));
      lowest = through + 1;
      await requeueFrom(connection, device, lowest);
      await desk.reload();
      continue;
    }
    if (answer.status >= 400) throw new Stopped(problemIn(answer));
    const results = resultsIn(answer.body.results, batch);
    size.grow();
    size.obey(answer.body.limits);
    const settled = results.filter(({status}) => status !== 'forked');
    desk.take(await keepAnswers(connection, device, settled));
    desk.sent(settled.length);
    if (settled.length < results.length) await stopForked(desk);
  }
}

/**
 * @param {Desk} desk
 * @param {BatchSize} size
 * @param {import('../ledger/replica.js').KeptEntry[]} batch
 */
async function sendBatch(desk, size, batch) {
  const {device, store, epoch} = desk.kept.info;
  const head = {v: WRITTEN, device, store, epoch, first: batch[0].n, app: desk.deps.app};
  const entries = batch.map(({text}) => text);
  const columns = toColumns(head, entries);
  const sent = columns === null ? {json: {...head, entries}} : {text: columns, type: COLUMNS_TYPE};
  try {
    const answer = await desk.api.ask('POST', 'entries', {...sent, gzip: true});
    if (answer.status === 413) size.shrink(batch.length);
    if (answer.status < 400) await desk.heard(answer);
    return answer;
  } catch (error) {
    if (error instanceof NoConnection && error.timedOut) size.shrink(batch.length);
    throw error;
  }
}

/**
 * The answers to the entries of a batch; NoConnection where they are not that.
 * @param {unknown} results
 * @param {{n: number}[]} batch
 * @returns {Result[]}
 */
function resultsIn(results, batch) {
  const sent = new Set(batch.map(({n}) => n));
  const fitting = Array.isArray(results) ? singly(results).filter((each) => sent.has(each.n) && STATUSES.has(each.status)) : [];
  if (!fitting.length) throw new NoConnection('the answer does not speak of what was sent');
  return fitting;
}

/**
 * A 409 that is no gap: the store was restored, or the phone is wrong in another way.
 * @param {Desk} desk
 * @param {import('./api.js').Answer} answer
 * @returns {Promise<never>}
 */
async function checkEpoch(desk, answer) {
  const epoch = answer.body.epoch ?? (await desk.api.health()).epoch;
  if (epoch !== desk.kept.info.epoch) throw new NewEpoch(epoch);
  throw new Stopped(problemIn(answer));
}

/**
 * Base holds other words under this phone's numbers: its notebook was copied to a second phone.
 * Both would go on giving the same numbers to different readings, so this one stops sending.
 * @param {Desk} desk
 * @returns {Promise<never>}
 */
export async function stopForked(desk) {
  const problem = new Problem(
    'This notebook is on two phones',
    'base already holds other readings under the numbers of this phone',
    'Nothing is lost: ask the lead for a joining code and join the survey again on this phone.',
  );
  desk.kept.info = await changeInfo(desk.connection, {stopped: problem.message});
  throw new Stopped(problem, {lasting: true});
}
