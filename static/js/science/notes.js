/** What was corrected, what could not be given and why. The mirror of fieldlog/science/notes.py. */

import {counted, degreesText} from './finding.js';

/**
 * @typedef {object} Circumstances
 * @property {number} readings
 * @property {number | null} bedforms
 * @property {number} fewestBedforms
 * @property {boolean} axial
 * @property {number | null} stepDeg
 * @property {number} reduced
 * @property {number} unnamed
 * @property {number} withoutMean
 * @property {boolean} identical
 * @property {boolean} meanExists
 * @property {boolean} hasInterval
 * @property {string} outcome
 * @property {number} units
 * @property {number} fewestForModes
 * @property {number | null} needed
 * @property {boolean} classes
 * @property {string} classesRefused
 */

/**
 * @param {Circumstances} facts
 * @returns {string[]}
 */
export function notes(facts) {
  if (facts.readings === 0) return [];
  const said = [...independence(facts), ...interval(facts), ...scale(facts), ...classes(facts)];
  if (facts.reduced) said.push(`${counted(facts.reduced, 'angle')} beyond 0 to 360 deg brought back to one turn.`);
  if (facts.needed !== null && facts.units < 20) {
    const unit = facts.bedforms === null ? 'reading' : 'dune';
    said.push(
      `The number needed rests on the spread of ${counted(facts.units, unit)} and is itself uncertain; ` +
        'it is set so that about 4 surveys in 5 reach the target.',
    );
  }
  if (facts.units >= 5 && facts.units < facts.fewestForModes) {
    const unit = facts.bedforms === null ? 'readings' : 'dunes';
    said.push(`Modes are not sought in fewer than ${facts.fewestForModes} ${unit}.`);
  }
  return said;
}

/** @param {Circumstances} facts */
function independence(facts) {
  if (facts.bedforms === null) return ['Readings taken as independent.'];
  const said = [`Mean, interval, tests and finding rest on ${counted(facts.bedforms, 'dune')}, not on readings.`];
  if (facts.bedforms < facts.fewestBedforms) {
    said.push(`Below ${facts.fewestBedforms} dunes no site interval is given.`);
  }
  if (facts.unnamed) {
    const have = facts.unnamed === 1 ? 'reading has' : 'readings have';
    said.push(`${facts.unnamed} ${have} no dune number: together they count as one dune.`);
  }
  if (facts.withoutMean) {
    const have = facts.withoutMean === 1 ? 'dune has' : 'dunes have';
    said.push(`${facts.withoutMean} ${have} readings that cancel out, and so no mean: left out.`);
  }
  return said;
}

/** @param {Circumstances} facts */
function interval(facts) {
  if (facts.identical) {
    const mend = facts.hasInterval ? '' : ' Check the instrument, or give the reading step.';
    return [`All directions are the same: kappa has no bound.${mend}`];
  }
  if (!facts.meanExists) return ['The directions cancel out: there is no mean direction.'];
  const unit = facts.bedforms === null ? 'readings' : 'dunes';
  if (facts.units < 5) return [`Interval and omnibus tests need at least 5 ${unit}.`];
  if (facts.bedforms !== null && facts.bedforms < facts.fewestBedforms) return [];
  if (facts.outcome !== 'one') return ['No interval of the mean, because the tests do not show one direction.'];
  if (!facts.hasInterval) return [`The ${unit} are too spread for an interval of the mean.`];
  return [];
}

/** @param {Circumstances} facts */
function scale(facts) {
  if (!facts.axial) return [];
  return [
    'Axes: mean, median, SD, deviation and interval are halved back to axes; ' +
      'resultant length, variance, kappa and tests are on the doubled angles.',
  ];
}

/** @param {Circumstances} facts */
function classes(facts) {
  if (!facts.stepDeg) return [];
  const step = degreesText(facts.stepDeg);
  const said = [`Resultant length and spread are corrected for readings in ${step} deg classes.`];
  if (facts.classes) said.push(`Kuiper and Watson p are for readings in ${step} deg classes.`);
  if (facts.classesRefused) said.push(facts.classesRefused);
  return said;
}
