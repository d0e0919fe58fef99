/** Kuiper and Watson together. The mirror of fieldlog/science/omnibus.py, without Rao's test. */

import {FEWEST_CLASSES, classCounts, kuiperP, watsonP} from './classes.js';
import {FEWEST_FOR_OMNIBUS, kuiper, sortedTurn, watson} from './uniformity.js';

/** @typedef {import('./uniformity.js').Test} Test */

/**
 * @param {Float64Array} units degrees
 * @param {number | null} widthDeg class width on the analysed circle
 * @returns {{kuiper: Test, watson: Test, classes: boolean, refused: string}}
 */
export function omnibus(units, widthDeg) {
  const sorted = sortedTurn(units);
  const v = kuiper(sorted);
  const u = watson(sorted);
  if (widthDeg === null || units.length < FEWEST_FOR_OMNIBUS) return {kuiper: v, watson: u, classes: false, refused: ''};
  const many = Math.round(360 / widthDeg);
  if (many < FEWEST_CLASSES) {
    return {
      kuiper: {statistic: v.statistic, p: null},
      watson: {statistic: u.statistic, p: null},
      classes: false,
      refused: 'Kuiper, Watson and Rao p are not given: the reading step leaves too few classes.',
    };
  }
  // Base gives Rao's p as well, and the same note where it cannot.
  const refused = many < 2 * units.length
    ? 'Rao p is not given: so many readings in so few classes are mostly ties.' : '';
  const counts = classCounts(units, widthDeg);
  if (counts === null) return {kuiper: v, watson: u, classes: false, refused};
  return {
    kuiper: {statistic: v.statistic, p: kuiperP(counts)},
    watson: {statistic: u.statistic, p: watsonP(counts)},
    classes: true,
    refused,
  };
}
