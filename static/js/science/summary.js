/** Everything that is said about one sample. The mirror of fieldlog/science/summary.py; the same keys. */

import {SampleError, checked} from './angles.js';
import {betweenSD, withinSD} from './bedforms.js';
import {decide, finding} from './finding.js';
import {FEWEST as FEWEST_FOR_MODES, findModes} from './modes.js';
import {meanAndLength} from './moments.js';
import {needed} from './needed.js';
import {notes} from './notes.js';
import {omnibus} from './omnibus.js';
import {FEWEST_TO_SAY, Sample} from './sample.js';
import {hotelling, moore} from './second_order.js';
import {NOT_GIVEN, harmonic, vTest} from './uniformity.js';
import {threshold} from './walk.js';

/** @typedef {import('./modes.js').Mode} Mode */
/** @typedef {import('./finding.js').Outcome} Outcome */
/** @typedef {import('./sample.js').Description} Description */
/**
 * @typedef {object} Options
 * @property {ArrayLike<unknown> | null} [bedforms] a name per reading, null for a reading without one
 * @property {boolean} [axial]
 * @property {number | null} [stepDeg]
 * @property {number | null} [againstDeg]
 * @property {number | null} [targetDeg]
 * @property {number} [fewestBedforms]
 * @property {string} [subject]
 * @property {'pending'} [modes] leaves the modes, and so outcome and finding, to the worker
 */
/**
 * Rao's test is base's: its keys are null here.
 * @typedef {object} Summary
 * @property {number} n
 * @property {boolean} axial
 * @property {number | null} mean_direction_deg
 * @property {number | null} median_direction_deg
 * @property {number | null} resultant_length
 * @property {number | null} circular_variance
 * @property {number | null} circular_sd_deg
 * @property {number | null} angular_deviation_deg
 * @property {number | null} kappa
 * @property {number | null} kappa_corrected
 * @property {number | null} ci95_low_deg
 * @property {number | null} ci95_high_deg
 * @property {string | null} ci_method
 * @property {number | null} rayleigh_z
 * @property {number | null} rayleigh_p
 * @property {number | null} v_u
 * @property {number | null} v_p
 * @property {number | null} kuiper_v
 * @property {number | null} kuiper_p
 * @property {number | null} watson_u2
 * @property {number | null} watson_p
 * @property {null} rao_u_deg
 * @property {null} rao_p
 * @property {Mode[]} modes
 * @property {number | null} readings_needed
 * @property {number | null} bedforms
 * @property {number | null} between_bedform_sd_deg
 * @property {number | null} within_bedform_sd_deg
 * @property {number | null} bedforms_needed
 * @property {Outcome} outcome
 * @property {string} finding
 * @property {string[]} notes
 * @property {number | null} target_deg
 * @property {boolean | null} enough
 * @property {number | null} threshold_resultant
 * @property {number | null} ci95_half_width_deg
 * @property {number | null} doubled_p
 * @property {number | null} trebled_p
 * @property {number[] | null} bedform_means_deg
 * @property {Description | null} by_readings
 * @property {{hotelling_f: number | null, hotelling_p: number | null, moore_r: number | null, moore_p: number | null} | null} second_order
 */

/**
 * Describe and judge one sample of directions, or of axes, in degrees.
 * @param {Iterable<number>} anglesDeg
 * @param {Options} [options]
 * @returns {Summary}
 * @throws {SampleError} for what is not a finite number and for lists of different lengths
 */
export function summarise(anglesDeg, options = {}) {
  const {axial = false, stepDeg = null, againstDeg = null, targetDeg = null, subject = 'readings'} = options;
  const sample = sampleOf(anglesDeg, options);
  const {units, groups, fold} = sample;
  const n = units.length;
  const described = sample.describe(units, groups === null ? sample.factor : 1);
  const doubled = harmonic(units, 2);
  const trebled = harmonic(units, 3);
  const {mean, r} = meanAndLength(units);
  const pattern = {
    p: [described.rayleigh_p, doubled.p, trebled.p],
    length: [r, doubled.statistic ?? 0, trebled.statistic ?? 0],
  };
  const pending = options.modes === 'pending' && n >= FEWEST_FOR_MODES && n >= sample.fewest;
  const modes = pending ? null : findModes(units);
  const outcome = pending ? 'pending' : decide(n, sample.fewest, pattern, modes, axial);

  const found = sample.interval();
  const centre = groups === null ? mean : found.meanDeg;
  const half = outcome === 'one' ? found.halfWidthDeg : null;
  const target = targetDeg === null ? null : targetDeg * fold;
  const enough = target === null ? null : half !== null && half <= target;
  const wanted = outcome === 'one' ? wantedOf(sample, found, target, enough) : null;
  const count = groups === null ? null : groups.groups;

  const tests = omnibus(units, groups === null ? sample.widthDeg : null);
  const v = againstDeg === null ? NOT_GIVEN : vTest(units, againstDeg * fold);
  const within = groups === null ? null : withinSD(groups, sample.factor);
  const between = groups === null ? null : betweenSD(groups, within);
  const halfShown = half === null ? null : half / fold;
  return {
    n: sample.angles.length,
    axial,
    mean_direction_deg: sample.shown(centre),
    median_direction_deg: described.median_direction_deg,
    resultant_length: described.resultant_length,
    circular_variance: described.circular_variance,
    circular_sd_deg: described.circular_sd_deg,
    angular_deviation_deg: described.angular_deviation_deg,
    kappa: described.kappa,
    kappa_corrected: described.kappa_corrected,
    ci95_low_deg: half === null || centre === null ? null : sample.shown(centre - half),
    ci95_high_deg: half === null || centre === null ? null : sample.shown(centre + half),
    ci_method: half === null ? null : sample.rule.method,
    rayleigh_z: described.rayleigh_z,
    rayleigh_p: described.rayleigh_p,
    v_u: v.statistic,
    v_p: v.p,
    kuiper_v: tests.kuiper.statistic,
    kuiper_p: tests.kuiper.p,
    watson_u2: tests.watson.statistic,
    watson_p: tests.watson.p,
    rao_u_deg: null,
    rao_p: null,
    modes: (modes ?? []).map((mode) => ({...mode, direction_deg: sample.shownOne(mode.direction_deg)})),
    readings_needed: readingsOf(sample, wanted),
    bedforms: count,
    between_bedform_sd_deg: sample.size(between),
    within_bedform_sd_deg: sample.size(within),
    bedforms_needed: groups === null ? null : wanted,
    outcome,
    finding: finding({
      outcome, readings: sample.angles.length, bedforms: count, fewest: sample.fewest, axial, subject,
      meanDeg: sample.shown(centre), halfWidthDeg: halfShown, directionsDeg: directionsOf(sample, outcome, modes),
      targetDeg, enough, needed: wanted,
    }),
    notes: notes({
      readings: sample.angles.length, bedforms: count, fewestBedforms: sample.fewest, axial, stepDeg,
      reduced: sample.beyond, unnamed: sample.unnamed, withoutMean: groups === null ? 0 : groups.withoutMean,
      identical: n > 1 && r === 1, meanExists: centre !== null, hasInterval: half !== null, outcome, units: n,
      fewestForModes: FEWEST_FOR_MODES, needed: wanted, classes: tests.classes, classesRefused: tests.refused,
    }),
    target_deg: targetDeg,
    enough,
    threshold_resultant: n >= FEWEST_TO_SAY ? threshold(n) : null,
    ci95_half_width_deg: halfShown,
    doubled_p: doubled.p,
    trebled_p: trebled.p,
    bedform_means_deg: groups === null ? null : groups.meansDeg.map((angle) => sample.shownOne(angle)),
    by_readings: groups === null ? null : sample.describe(sample.angles, sample.factor),
    second_order: groups === null ? null : secondOrder(groups),
  };
}

/**
 * @param {Iterable<number>} anglesDeg
 * @param {Options} options
 */
function sampleOf(anglesDeg, options) {
  const {axial = false, stepDeg = null, againstDeg = null, targetDeg = null, fewestBedforms = 5} = options;
  const raw = checked(anglesDeg);
  for (const [name, value] of /** @type {const} */ ([['step', stepDeg], ['target', targetDeg]])) {
    if (value !== null && !(value > 0 && value <= 90)) {
      throw new SampleError(`${name}: ${value} is no ${name} in degrees. Give a number above 0 and at most 90.`);
    }
  }
  if (againstDeg !== null && !Number.isFinite(againstDeg)) {
    throw new SampleError(`against: ${againstDeg} is not a direction. Give degrees as a number.`);
  }
  let bedforms = options.bedforms ?? null;
  if (bedforms !== null && bedforms.length !== raw.length) {
    throw new SampleError(
      `bedforms: ${raw.length} readings and ${bedforms.length} bedforms. Give one bedform per reading.`,
    );
  }
  if (bedforms !== null && Array.from(bedforms).every((name) => (name ?? null) === null)) bedforms = null;
  return new Sample(raw, bedforms, axial, stepDeg, fewestBedforms);
}

/**
 * Independent directions needed in all for the target.
 * @param {Sample} sample
 * @param {import('./interval.js').Interval} found
 * @param {number | null} target
 * @param {boolean | null} enough
 */
function wantedOf(sample, found, target, enough) {
  const n = sample.units.length;
  if (target === null || found.spread === null) return null;
  const count = needed(found.spread, n, target, sample.rule);
  if (count === null) return null;
  const least = Math.max(count, sample.fewest);
  return enough ? Math.min(least, n) : Math.max(least, n + 1);
}

/**
 * Readings on the wanted number of bedforms, as many on each as now.
 * @param {Sample} sample
 * @param {number | null} wanted
 */
function readingsOf(sample, wanted) {
  if (wanted === null || sample.groups === null) return wanted;
  return Math.ceil((wanted * sample.angles.length) / sample.groups.groups - 1e-9);
}

/**
 * The directions that the finding names when there is no single mean, as shown.
 * @param {Sample} sample
 * @param {Outcome} outcome
 * @param {Mode[] | null} modes
 */
function directionsOf(sample, outcome, modes) {
  const order = outcome === 'three_or_more' ? 3 : 2;
  if (!['two_opposed', 'two', 'three_or_more'].includes(outcome)) return [];
  if (modes && modes.length >= 2) return modes.map((mode) => sample.shownOne(mode.direction_deg));
  const {mean} = meanAndLength(sample.units, order);
  if (mean === null) return [];
  return Array.from({length: order}, (_, i) => sample.shownOne((mean + 360 * i) / order));
}

/** @param {import('./bedforms.js').Bedforms} groups */
function secondOrder(groups) {
  const f = hotelling(groups.meansDeg, groups.lengths);
  const weighted = moore(groups.meansDeg, groups.lengths);
  return {hotelling_f: f.statistic, hotelling_p: f.p, moore_r: weighted.statistic, moore_p: weighted.p};
}
