/** What a sample shows, in one sentence. The mirror of fieldlog/science/finding.py. */

import {apart, reducedOne} from './angles.js';

/** @typedef {'one' | 'two_opposed' | 'two' | 'three_or_more' | 'spread' | 'too_few' | 'pending'} Outcome */
/** @typedef {import('./modes.js').Mode} Mode */
/** @typedef {{p: (number | null)[], length: number[]}} Pattern of the angles, doubled and trebled */
/**
 * @typedef {object} Facts
 * @property {Outcome} outcome
 * @property {number} readings
 * @property {number | null} bedforms
 * @property {number} fewest
 * @property {boolean} axial
 * @property {string} subject
 * @property {number | null} meanDeg
 * @property {number | null} halfWidthDeg
 * @property {number[]} directionsDeg
 * @property {number | null} targetDeg
 * @property {boolean | null} enough
 * @property {number | null} needed
 */

const LEVELS = [0.05, 0.025, 0.025];
const OPPOSED_FROM_DEG = 150;
const SPREAD_FROM = 10;

/**
 * @param {number} n
 * @param {number} fewest
 * @param {Pattern} pattern
 * @param {Mode[] | null} modes on the circle that is analysed
 * @param {boolean} axial
 * @returns {Outcome}
 */
export function decide(n, fewest, pattern, modes, axial) {
  if (n < fewest) return 'too_few';
  if (modes && modes.length >= 2) {
    if (modes.length >= 3) return 'three_or_more';
    const opposed = apart(modes[0].direction_deg, modes[1].direction_deg) >= OPPOSED_FROM_DEG;
    return opposed && !axial ? 'two_opposed' : 'two';
  }
  const [one, doubled, trebled] = pattern.p.map((p, i) => p !== null && p <= LEVELS[i]);
  const length = pattern.length;
  const pair = axial ? 'two' : 'two_opposed';
  if (trebled && length[2] > Math.max(length[0], length[1])) return 'three_or_more';
  if (doubled && length[1] > length[0]) return pair;
  if (one) return 'one';
  if (doubled) return pair;
  if (trebled) return 'three_or_more';
  return n >= SPREAD_FROM ? 'spread' : 'too_few';
}

/**
 * One plain sentence.
 * @param {Facts} facts
 */
export function finding(facts) {
  const counts = countsOf(facts);
  if (facts.readings === 0) return 'No readings.';
  if (facts.outcome === 'pending') return `${counts}: modes are still being sought.`;
  if (facts.outcome === 'one') return `${lead(facts)} ${meanOf(facts)}: ${counts}, one direction${reach(facts)}.`;
  if (facts.outcome === 'too_few') return tooFew(facts, counts);
  if (facts.outcome === 'spread') {
    return `${counts} ${facts.readings === 1 ? 'is' : 'are'} spread all round: no direction shows.`;
  }
  const named = {two_opposed: 'two opposed directions', two: 'two directions', three_or_more: 'three or more directions'};
  const sorted = facts.directionsDeg.slice().sort((a, b) => a - b);
  const where = sorted.length ? ` ${join(sorted.map((d) => String(whole(d, facts.axial))))} deg` : ' more than one way';
  return `${lead(facts)}${where}: ${counts}, ${named[facts.outcome]}; no single mean.`;
}

/**
 * Whole degrees, 0 <= x < 360 (180 for axes).
 * @param {number} angleDeg
 * @param {boolean} axial
 */
export function whole(angleDeg, axial) {
  const limit = axial ? 180 : 360;
  return Math.floor(reducedOne(angleDeg, limit) + 0.5) % limit;
}

/** @param {string[]} parts */
export function join(parts) {
  if (parts.length < 2) return parts.join('');
  return `${parts.slice(0, -1).join(', ')} and ${parts[parts.length - 1]}`;
}

/**
 * @param {number} n
 * @param {string} singular
 */
export function counted(n, singular) {
  return n === 1 ? `${n} ${singular}` : `${n} ${singular}s`;
}

/** @param {number} value */
export function degreesText(value) {
  const tenths = Math.floor(value * 10 + 0.5) / 10;
  return Number.isInteger(tenths) ? String(tenths) : tenths.toFixed(1);
}

/** @param {Facts} facts */
function countsOf(facts) {
  const said = counted(facts.readings, 'reading');
  return facts.bedforms === null ? said : `${said} on ${counted(facts.bedforms, 'dune')}`;
}

/** @param {Facts} facts */
function lead(facts) {
  const subject = facts.subject.slice(0, 1).toUpperCase() + facts.subject.slice(1);
  if (facts.axial) return `${subject} trend`;
  return facts.subject.toLowerCase().includes('face') ? `${subject} face` : `${subject} point towards`;
}

/** @param {Facts} facts */
function meanOf(facts) {
  if (facts.meanDeg === null) return 'no mean';
  const mean = whole(facts.meanDeg, facts.axial);
  if (facts.halfWidthDeg === null) return `about ${mean} deg, without an interval`;
  return `${mean} +/- ${Math.ceil(facts.halfWidthDeg - 1e-9)} deg`;
}

/** @param {Facts} facts */
function reach(facts) {
  if (facts.targetDeg === null || facts.enough === null) return '';
  const target = `+/- ${degreesText(facts.targetDeg)} deg`;
  if (facts.enough) return `; enough for ${target}`;
  const have = facts.bedforms === null ? facts.readings : facts.bedforms;
  if (facts.needed === null) {
    return facts.halfWidthDeg !== null ? `; ${target} is out of reach` : `; not enough for ${target}`;
  }
  const more = counted(facts.needed - have, facts.bedforms === null ? 'more reading' : 'more dune');
  return `; not yet enough for ${target}: about ${more}, ${facts.needed} in all`;
}

/**
 * @param {Facts} facts
 * @param {string} counts
 */
function tooFew(facts, counts) {
  const units = facts.bedforms === null ? facts.readings : facts.bedforms;
  const single = facts.readings === 1;
  if (units < facts.fewest) {
    const unit = facts.bedforms === null ? 'readings' : 'dunes';
    return `${counts} ${single ? 'is' : 'are'} too few to say: read at least ${facts.fewest} ${unit}.`;
  }
  return `${counts} ${single ? 'does' : 'do'} not show a direction.`;
}
