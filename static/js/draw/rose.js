/** The rose: bearings and their summary to shapes; the mirror of fieldlog/draw/rose.py. */

import { arc, arrow, at, bar, circle, cross, flag, lettering, petal, spoke, triangle } from './marks.js';
import { spoken, title, whole } from './reading_aloud.js';
import { stack, turn } from './stack.js';

/** @typedef {import('./marks.js').Shape} Shape */
/** @typedef {import('./reading_aloud.js').Petals} Petals */

/**
 * What the rose needs of a summary; angles in degrees, null where the value does not exist.
 * @typedef {{
 *   mean_direction_deg: number | null,
 *   resultant_length: number | null,
 *   threshold_resultant: number | null,
 *   ci95_low_deg: number | null,
 *   ci95_high_deg: number | null,
 *   modes: readonly {direction_deg: number}[] | null,
 *   outcome: string,
 *   finding: string,
 * }} RoseSummary
 */

/**
 * The shapes in drawing order, in a square of `size`; `title` and `text` are its text twin.
 * @typedef {{size: number, detail: string, shapes: Shape[], title: string, text: string}} Rose
 */

/**
 * `axial`: axes instead of directions. `size`: side of the square in CSS pixels; small roses have
 * fewer marks. `crossedOutDeg`: readings to show as crosses. `expectedDeg`: the expected facing,
 * towards. `marked`: positions in the readings to ring.
 * @typedef {{axial: boolean, size: number, crossedOutDeg?: readonly number[], expectedDeg?: number | null,
 *   marked?: readonly number[]}} RoseOptions
 */

/** @typedef {[number, number]} Pair */

/**
 * Lengths for a square of `reference`; those after `dots` are distances outward from the rim.
 * @typedef {{detail: string, reference: number, rim: number, dots: number[], tick: Pair, tickEveryDeg: number,
 *   interval: Pair, mode: Pair | null, expected: Pair | null, letters: string[], letter: Pair, label: number}} Layout
 */

/** A multiple of the usual reading steps (1, 2, 5, 10), so that no petal is favoured by rounding. */
export const PETAL_DEG = 20;

export const FEWEST_FOR_PETALS = 8;

const LETTER_CLEARANCE_DEG = 12;

/** From the one with most marks down; a size takes the first that is at most 1.6 times as large. @type {Layout[]} */
const LAYOUTS = [
  {
    detail: 'full', reference: 320, rim: 110, dots: [4.2, 3.6], tick: [4, 8], tickEveryDeg: 30,
    interval: [12, 3], mode: [16, 23], expected: [25, 37], letters: ['N', 'E', 'S', 'W'], letter: [42, 14], label: 20,
  },
  {
    detail: 'middle', reference: 120, rim: 45, dots: [2.6, 2.2], tick: [2, 4.5], tickEveryDeg: 30,
    interval: [6, 1.6], mode: [8.5, 13], expected: [8, 15], letters: [], letter: [0, 0], label: 0,
  },
  {
    detail: 'small', reference: 64, rim: 27, dots: [1.7, 1.5], tick: [1.5, 4], tickEveryDeg: 360,
    interval: [3.2, 0], mode: null, expected: null, letters: [], letter: [0, 0], label: 0,
  },
];

/**
 * The rose of a sample.
 * @param {readonly number[]} readingsDeg degrees from true north: directions (towards), or axes
 * @param {RoseSummary} summary
 * @param {RoseOptions} options
 * @returns {Rose}
 * @throws {RangeError} for a bearing that is not a finite number
 */
export function rose(readingsDeg, summary, { axial, size, crossedOutDeg = [], expectedDeg = null, marked = [] }) {
  for (const [name, values] of /** @type {[string, readonly number[]][]} */ ([
    ['reading', readingsDeg],
    ['crossed-out reading', crossedOutDeg],
  ])) {
    const i = values.findIndex((value) => !Number.isFinite(value));
    if (i >= 0) throw new RangeError(`${name} ${i + 1}: ${values[i]} is not a bearing. Give degrees as a number.`);
  }
  const n = readingsDeg.length;
  const layout = LAYOUTS.find((one) => size * 1.6 >= one.reference) ?? LAYOUTS[LAYOUTS.length - 1];
  const drawing = new Drawing(layout, size, axial);
  const petals = petalCounts(readingsDeg, axial);
  drawing.petals(petals, n);
  drawing.ground(n ? summary.threshold_resultant : null);
  drawing.letters(expectedDeg);
  // A hollow arrow would blank the dots that it lies on, a solid one would be broken up by them.
  const solid = showsDirection(summary);
  if (!solid) drawing.mean(summary, 'rose-mean-hollow');
  const rings = drawing.dots(readingsDeg, crossedOutDeg, new Set(marked));
  if (solid) drawing.mean(summary, 'rose-mean');
  drawing.shapes.push(...rings);
  drawing.outside(summary, expectedDeg);
  drawing.label(summary, n > 0);
  return {
    size,
    detail: layout.detail,
    shapes: drawing.shapes,
    title: title(n, summary, axial),
    text: spoken(readingsDeg, summary, petals, axial, crossedOutDeg, expectedDeg),
  };
}

/**
 * [middle bearing, count] of each petal, from north clockwise; axes from 0 to 180. A reading on the
 * border of two petals counts half in each.
 * @param {readonly number[]} readingsDeg
 * @param {boolean} axial
 * @returns {Petals}
 */
export function petalCounts(readingsDeg, axial) {
  const period = axial ? 180 : 360;
  const n = Math.round(period / PETAL_DEG);
  /** @type {number[]} */
  const counts = new Array(n).fill(0);
  for (const reading of readingsDeg) {
    const place = turn(reading + PETAL_DEG / 2, period) / PETAL_DEG;
    const k = Math.floor(place);
    if (place === k) {
      counts[(k + n - 1) % n] += 0.5;
      counts[k] += 0.5;
    } else {
      counts[k % n] += 1;
    }
  }
  return counts.map((count, k) => [k * PETAL_DEG, count]);
}

/**
 * Whether the resultant reaches what the Rayleigh test needs.
 * @param {RoseSummary} summary
 * @returns {boolean}
 */
export function showsDirection({ resultant_length: length, threshold_resultant: threshold }) {
  return length !== null && threshold !== null && length >= threshold;
}

/** Adds marks to one list, scaled to the size asked for. */
class Drawing {
  /**
   * @param {Layout} layout
   * @param {number} size
   * @param {boolean} axial
   */
  constructor(layout, size, axial) {
    this.layout = layout;
    this.scale = size / layout.reference;
    this.middle = size / 2;
    this.rim = layout.rim * this.scale;
    this.ends = axial ? [0, 180] : [0];
    this.axial = axial;
    /** @type {Shape[]} */
    this.shapes = [];
  }

  /**
   * @param {Pair} pair
   * @returns {Pair}
   */
  band([inner, outer]) {
    return [this.rim + inner * this.scale, this.rim + outer * this.scale];
  }

  /**
   * @param {Petals} petals
   * @param {number} n
   */
  petals(petals, n) {
    if (n < FEWEST_FOR_PETALS) return;
    for (const [bearing, count] of petals) {
      if (!count) continue;
      const radius = this.rim * Math.sqrt(count / n);
      for (const end of this.ends) {
        this.shapes.push(petal('rose-petal', this.middle, bearing + end, PETAL_DEG / 2, radius));
      }
    }
  }

  /** @param {number | null} threshold */
  ground(threshold) {
    /** @type {[number, number]} */
    const centre = [this.middle, this.middle];
    this.shapes.push(circle('rose-rim', centre, this.rim));
    for (let bearing = 0; bearing < 360; bearing += this.layout.tickEveryDeg) {
      const role = bearing ? 'rose-tick' : 'rose-north';
      this.shapes.push(spoke(role, this.middle, bearing, ...this.band(this.layout.tick)));
    }
    if (threshold !== null && threshold <= 1) {
      this.shapes.push(circle('rose-threshold', centre, this.rim * threshold));
    }
  }

  /**
   * N E S W, but none where the expected facing or its wind stands.
   * @param {number | null} expected
   */
  letters(expected) {
    const [distance, height] = this.layout.letter;
    this.layout.letters.forEach((letter, i) => {
      if (expected !== null && Math.abs(turn(expected - 90 * i + 90, 180) - 90) < LETTER_CLEARANCE_DEG) return;
      const place = at(this.middle, 90 * i, this.rim + distance * this.scale);
      this.shapes.push(lettering('rose-letter', place, height * this.scale, letter));
    });
  }

  /**
   * Dots and crosses; returns the rings of marked readings, which go over everything.
   * @param {readonly number[]} readings
   * @param {readonly number[]} crossedOut
   * @param {Set<number>} marked
   * @returns {Shape[]}
   */
  dots(readings, crossedOut, marked) {
    const period = this.axial ? 180 : 360;
    const both = [...readings, ...crossedOut];
    const { levels, dot, step } = stack(both, period, this.rim, this.layout.dots.map((size) => size * this.scale));
    const role = this.axial ? 'rose-end' : 'rose-dot';
    /** @type {Shape[]} */
    const rings = [];
    both.forEach((bearing, i) => {
      const radius = this.rim - levels[i] * step;
      for (const end of this.ends) {
        const place = at(this.middle, turn(bearing, period) + end, radius);
        if (i < readings.length) this.shapes.push(circle(role, place, dot));
        else this.shapes.push(cross('rose-crossed-out', place, dot));
        if (i < readings.length && marked.has(i)) rings.push(circle('rose-marked', place, dot * 1.9));
      }
    });
    return rings;
  }

  /**
   * @param {RoseSummary} summary
   * @param {string} role
   */
  mean(summary, role) {
    const { mean_direction_deg: direction, resultant_length: length } = summary;
    if (direction === null || length === null) return;
    const draw = this.axial ? bar : arrow;
    this.shapes.push(draw(role, this.middle, direction, this.rim * Math.min(length, 1), this.rim));
  }

  /**
   * @param {RoseSummary} summary
   * @param {number | null} expected
   */
  outside(summary, expected) {
    const { ci95_low_deg: low, ci95_high_deg: high } = summary;
    const { interval, mode: modeBand, expected: expectedBand } = this.layout;
    if (low !== null && high !== null) {
      const [distance, cap] = interval;
      const span = turn(high - low, this.axial ? 180 : 360);
      for (const end of this.ends) {
        const radius = this.rim + distance * this.scale;
        this.shapes.push(arc('rose-interval', this.middle, low + end, span, radius, cap * this.scale));
      }
    }
    if (modeBand) {
      for (const mode of summary.modes ?? []) {
        for (const end of this.ends) {
          this.shapes.push(spoke('rose-mode', this.middle, mode.direction_deg + end, ...this.band(modeBand)));
        }
      }
    }
    if (expectedBand && expected !== null) {
      const [inner, outer] = this.band(expectedBand);
      this.shapes.push(triangle('rose-expected', this.middle, expected, inner, outer));
      this.shapes.push(flag('rose-wind', this.middle, expected + 180, inner, outer));
    }
  }

  /**
   * The mean in figures, where a mean may be announced: behind the arrow, beside the bar.
   * @param {RoseSummary} summary
   * @param {boolean} anyReadings
   */
  label(summary, anyReadings) {
    if (!this.layout.label) return;
    const height = this.layout.label * this.scale;
    const direction = summary.mean_direction_deg;
    if (!anyReadings) {
      this.shapes.push(lettering('rose-empty', at(this.middle, 180, this.rim * 0.5), height * 0.8, 'no readings yet'));
    } else if (showsDirection(summary) && summary.outcome === 'one' && direction !== null) {
      const place = at(this.middle, direction + (this.axial ? 90 : 180), this.rim * 0.42);
      this.shapes.push(lettering('rose-figure', place, height, `${whole(direction, this.axial ? 180 : 360)}\u00b0`));
    }
  }
}
