/**
 * When hand-over happens: after a save, when the network returns, when the page is seen again, and
 * on a timer that always runs. A Web Lock keeps it to one page of a phone.
 */

import {beginEpoch} from '../store/answers.js';
import {keepLearnt} from '../store/load.js';
import {Problem} from '../store/problem.js';
import {waitMillis} from './backoff.js';
import {NewEpoch, NoConnection, Refused, Stopped, WrongStore} from './failures.js';
import {PartSize, sendPhotos} from './photos.js';
import {pull} from './pull.js';
import {BatchSize, push} from './push.js';

/**
 * What hand-over works on: the open notebook, seen from this side.
 * @typedef {object} Desk
 * @property {import('../store/deps.js').Deps} deps
 * @property {import('../store/open.js').Connection} connection
 * @property {import('../store/load.js').Kept} kept
 * @property {import('./api.js').StoreApi} api
 * @property {(entries: import('../ledger/replica.js').KeptEntry[]) => void} take entries that were kept just now
 * @property {() => Promise<void>} reload take everything from the disk again
 * @property {(answer: import('./api.js').Answer) => Promise<void>} heard learns the store's time
 * @property {(count: number) => void} sent
 * @property {() => {sha256: string, size: number}[]} photosToSend smallest first
 * @property {(sha256: string, changes: {isSent: boolean, problem: string}) => void} photoMarked
 * @property {() => {unsent: number, unsentPhotos: number}} counts
 */

/**
 * @typedef {object} HandoverState
 * @property {'idle' | 'sending' | 'offline' | 'refused' | 'wrong_store' | 'stopped'} phase `stopped`: something that a
 * person has to look at; `message` and `mend` say what
 * @property {number} sent entries answered in this hand-over
 * @property {number} of entries that waited when it began
 * @property {number} photosSent
 * @property {number} photosOf
 * @property {string | null} lastAt UTC, when hand-over last ended with nothing left
 * @property {string} message '' where all is well
 * @property {string} mend what to do about it
 * @property {number | null} offsetMs store time minus phone time, as last learnt
 */

const POLL_MS = 300_000;
const BUSY_MS = 20_000;
const EPOCHS = 3;

export class Runner {
  /**
   * @param {Desk} desk
   * @param {() => void} onChange called whenever the state has changed
   */
  constructor(desk, onChange) {
    this.desk = desk;
    this.onChange = onChange;
    this.size = new BatchSize();
    this.partSize = new PartSize();
    this.failures = 0;
    this.isStarted = false;
    this.isAgain = false;
    /** @type {number | null} */
    this.timer = null;
    /** @type {Promise<void> | null} */
    this.running = null;
    /** @type {() => void} */
    this.forgetChances = () => {};
    /** @type {HandoverState} */
    this.state = {
      phase: 'idle', sent: 0, of: 0, photosSent: 0, photosOf: 0, lastAt: desk.kept.lastAt, message: '',
      mend: '', offsetMs: desk.kept.offsetMs,
    };
  }

  /** Hand over from now on, by itself. */
  start() {
    if (this.isStarted) return;
    this.isStarted = true;
    this.forgetChances = this.desk.deps.onChance(() => this.soon());
    this.soon();
  }

  /** Stop handing over by itself. */
  stop() {
    this.isStarted = false;
    this.forgetChances();
    this.#setTimer(null);
  }

  /** Something was saved, or a connection may be there: try without waiting for the timer. */
  soon() {
    if (this.isStarted) void this.now();
  }

  /**
   * Hand over now; resolves when it has ended, well or not: `state` says which.
   * @returns {Promise<void>}
   */
  now() {
    if (this.running) {
      this.isAgain = true;
      return this.running;
    }
    this.#setTimer(null);
    this.running = this.#run().finally(() => {
      this.running = null;
    });
    return this.running;
  }

  /** @param {Partial<HandoverState>} changes */
  set(changes) {
    this.state = {...this.state, ...changes};
    this.onChange();
  }

  async #run() {
    let waitMs = POLL_MS;
    do {
      this.isAgain = false;
      waitMs = await this.#locked();
    } while (this.isAgain && this.state.phase === 'idle');
    if (this.isStarted) this.#setTimer(waitMs);
  }

  /** @returns {Promise<number>} milliseconds until the next try */
  async #locked() {
    const {locks} = this.desk.deps;
    if (!locks) return this.#pass();
    const name = `ergbook-handover-${this.desk.kept.info.survey}`;
    return locks.request(name, {ifAvailable: true}, (lock) => {
      if (lock) return this.#pass();
      return Promise.resolve(BUSY_MS); // another page of this phone is at it
    });
  }

  /**
   * Receive the whole survey; throws where a hand-over would only note the failure.
   * @param {(done: number, of: number) => void} onProgress
   * @returns {Promise<void>}
   */
  async receiveWhole(onProgress) {
    await this.#throughEpochs(() => pull(this.desk, onProgress));
  }

  /** @returns {Promise<number>} milliseconds until the next try */
  async #pass() {
    const {unsent, unsentPhotos} = this.desk.counts();
    this.set({
      sent: 0, of: unsent, photosSent: 0, photosOf: unsentPhotos, ...(unsent + unsentPhotos ? {phase: 'sending'} : {}),
    });
    try {
      await this.#throughEpochs(() => this.#handOver());
      const lastAt = new Date(this.desk.deps.now()).toISOString();
      await keepLearnt(this.desk.connection, 'lastAt', lastAt);
      this.failures = 0;
      this.set({phase: 'idle', message: '', mend: '', lastAt});
      return POLL_MS;
    } catch (error) {
      this.failures += 1;
      this.set(failed(error));
      return error instanceof NoConnection ? waitMillis(this.failures, this.desk.deps.random) : POLL_MS;
    }
  }

  async #handOver() {
    const {desk} = this;
    if (desk.kept.info.stopped) {
      throw new Stopped(new Problem(desk.kept.info.stopped, '', 'Ask the lead for a joining code and join the survey again on this phone.'));
    }
    await push(desk, this.size);
    await pull(desk);
    await sendPhotos(desk, this.partSize);
  }

  /**
   * Do it, and from the start again where the store has begun a new epoch meanwhile.
   * @param {() => Promise<void>} work
   */
  async #throughEpochs(work) {
    const {desk} = this;
    for (let epochs = 0; ; epochs += 1) {
      try {
        await work();
        return;
      } catch (error) {
        if (!(error instanceof NewEpoch) || epochs === EPOCHS) throw error;
        await beginEpoch(desk.connection, error.epoch);
        await desk.reload();
        const {unsent, unsentPhotos} = desk.counts();
        this.set({sent: 0, of: unsent, photosSent: 0, photosOf: unsentPhotos});
      }
    }
  }

  /** @param {number | null} millis */
  #setTimer(millis) {
    const {deps} = this.desk;
    if (this.timer !== null) deps.clearTimer(this.timer);
    this.timer = millis === null ? null : deps.setTimer(() => {
      this.timer = null;
      this.soon();
    }, millis);
  }
}

/**
 * @param {unknown} error
 * @returns {Partial<HandoverState>}
 */
function failed(error) {
  if (error instanceof NoConnection) return {phase: 'offline', message: error.message, mend: ''};
  if (error instanceof Refused) {
    const {message, mend} = error.problem;
    return {phase: 'refused', message, mend: mend || 'Everything stays on this phone. Ask the lead for a new joining code.'};
  }
  if (error instanceof WrongStore) {
    return {phase: 'wrong_store', message: error.message, mend: 'Everything stays on this phone. Open Ergbook at the address where it joined.'};
  }
  if (error instanceof Stopped || error instanceof Problem) {
    const problem = error instanceof Stopped ? error.problem : error;
    return {phase: 'stopped', message: problem.message, mend: problem.mend};
  }
  const text = error instanceof Error ? error.message : String(error);
  return {phase: 'stopped', message: text, mend: 'Everything stays on this phone. Reload the page; if it stays so, tell whoever runs the store.'};
}
