/** A sample on the circle that is analysed. The mirror of fieldlog/science/sample.py. */

import {degrees, radians, reduced, reducedOne} from './angles.js';
import {gather, weights} from './bedforms.js';
import {kappaCorrected, kappaOf} from './concentration.js';
import {OF_BEDFORMS, OF_READINGS, interval} from './interval.js';
import {medianDirection} from './median.js';
import {angularDeviation, circularSD, groupingFactor, meanAndLength} from './moments.js';
import {rayleigh} from './uniformity.js';

/** @typedef {import('./angles.js').Angles} Angles */
/**
 * @typedef {object} Description
 * @property {number} n
 * @property {number | null} mean_direction_deg
 * @property {number | null} median_direction_deg
 * @property {number | null} resultant_length
 * @property {number | null} circular_variance
 * @property {number | null} circular_sd_deg
 * @property {number | null} angular_deviation_deg
 * @property {number | null} kappa
 * @property {number | null} kappa_corrected
 * @property {number | null} rayleigh_z
 * @property {number | null} rayleigh_p
 */

export const FEWEST_TO_SAY = 5;

export class Sample {
  /**
   * @param {Float64Array} raw degrees
   * @param {ArrayLike<unknown> | null} names bedforms, per reading
   * @param {boolean} axial
   * @param {number | null} stepDeg
   * @param {number} fewest
   */
  constructor(raw, names, axial, stepDeg, fewest) {
    this.fold = axial ? 2 : 1;
    this.widthDeg = stepDeg === null ? null : stepDeg * this.fold;
    this.beyond = raw.reduce((count, angle) => count + (angle < 0 || angle > 360 ? 1 : 0), 0);
    this.angles = reduced(raw.map((angle) => angle * this.fold));
    this.groups = names === null ? null : gather(this.angles, names);
    this.unnamed = names === null ? 0 : Array.from(names).filter((name) => (name ?? null) === null).length;
    /** @type {Float64Array} */
    this.units = this.groups === null ? this.angles : Float64Array.from(this.groups.meansDeg);
    this.fewest = this.groups === null ? FEWEST_TO_SAY : Math.max(fewest, 1);
    this.factor = this.widthDeg === null ? 1 : groupingFactor(this.widthDeg);
    this.rule = this.groups === null ? OF_READINGS : OF_BEDFORMS;
  }

  /**
   * A direction on the analysed circle as it is shown.
   * @param {number} angleDeg
   */
  shownOne(angleDeg) {
    return reducedOne(angleDeg / this.fold, 360 / this.fold);
  }

  /** @param {number | null} angleDeg */
  shown(angleDeg) {
    return angleDeg === null ? null : this.shownOne(angleDeg);
  }

  /**
   * A spread in radians on the analysed circle as degrees shown.
   * @param {number | null} spread
   */
  size(spread) {
    return spread === null ? null : degrees(spread) / this.fold;
  }

  /**
   * @param {Angles} angles
   * @param {number} factor corrects R for grouping, not the test
   * @returns {Description}
   */
  describe(angles, factor) {
    const n = angles.length;
    const {mean, r} = meanAndLength(angles);
    const corrected = Math.min(1, factor * r);
    const test = rayleigh(r, n);
    const kappa = n > 1 ? kappaOf(corrected) : null;
    return {
      n,
      mean_direction_deg: this.shown(mean),
      median_direction_deg: this.shown(medianDirection(angles, mean)),
      resultant_length: n ? corrected : null,
      circular_variance: n ? 1 - corrected : null,
      circular_sd_deg: n > 1 ? this.size(circularSD(corrected)) : null,
      angular_deviation_deg: n > 1 ? this.size(angularDeviation(corrected)) : null,
      kappa,
      kappa_corrected: kappaCorrected(kappa, n),
      rayleigh_z: test.statistic,
      rayleigh_p: test.p,
    };
  }

  interval() {
    if (this.groups !== null) return interval(this.units, this.rule, {lengths: weights(this.groups)});
    const leastSpread = this.widthDeg === null ? 0 : Math.sin(radians(this.widthDeg) / Math.sqrt(12));
    return interval(this.units, this.rule, {leastSpread});
  }
}
