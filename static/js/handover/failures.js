/** The ways in which a hand-over can end before its end. None of them deletes anything. */

import {Problem} from '../store/problem.js';

/** Nobody answered, or somebody who is not the store: a cut line, a time-out, a hotel's sign-in page. */
export class NoConnection extends Error {
  /**
   * @param {string} message
   * @param {{timedOut?: boolean}} [how]
   */
  constructor(message, {timedOut = false} = {}) {
    super(message);
    this.timedOut = timedOut;
  }
}

/** The store does not let this phone in (any more). */
export class Refused extends Error {
  /** @param {Problem} problem */
  constructor(problem) {
    super(problem.message);
    this.problem = problem;
  }
}

/** A store answers, but not the one that this phone joined. */
export class WrongStore extends Error {
  constructor() {
    super('another store answers at this address');
  }
}

/** The store was restored from a back-up since the phone last asked. */
export class NewEpoch extends Error {
  /** @param {string} epoch */
  constructor(epoch) {
    super('the store has gone back in time');
    this.epoch = epoch;
  }
}

/** Something is wrong that trying again does not mend; a person has to look. */
export class Stopped extends Error {
  /**
   * @param {Problem} problem
   * @param {{lasting?: boolean}} [how] lasting: not to be tried again until the phone joins anew
   */
  constructor(problem, {lasting = false} = {}) {
    super(problem.message);
    this.problem = problem;
    this.lasting = lasting;
  }
}
