/** A small north-up drawing of what a bearing means on the ground: an arrow, or an axis. */

import {el, fill, svgEl} from './element.js';

const RADIUS = 36;
const MIDDLE = 44;

/**
 * @returns {{element: HTMLElement, show: (trueDeg: number | null, axial: boolean) => void}}
 */
export function dial() {
  const mark = svgEl('g', {class: 'bearing'});
  const rim = Array.from({length: 12}, (_, i) => {
    const [x1, y1] = at(30 * i, RADIUS);
    const [x2, y2] = at(30 * i, RADIUS - (i % 3 ? 4 : 7));
    return svgEl('line', {x1, y1, x2, y2, class: 'tick'});
  });
  const element = el('div', {class: 'dial', 'aria-hidden': 'true'});
  element.append(
    svgEl('svg', {viewBox: '0 0 88 88', width: 88, height: 88}, svgEl('circle', {cx: MIDDLE, cy: MIDDLE, r: RADIUS, class: 'rim'}), rim, svgEl('text', {x: MIDDLE, y: 21, class: 'north'}, 'N'), mark),
  );
  return {
    element,
    show(trueDeg, axial) {
      if (trueDeg === null) return fill(mark);
      fill(mark, axial ? axis(trueDeg) : arrow(trueDeg));
    },
  };
}

/** @param {number} deg */
function axis(deg) {
  const [x1, y1] = at(deg, RADIUS - 2);
  const [x2, y2] = at(deg + 180, RADIUS - 2);
  return [svgEl('line', {x1, y1, x2, y2, class: 'shaft'})];
}

/** @param {number} deg */
function arrow(deg) {
  const [x, y] = at(deg, RADIUS - 10);
  const head = [at(deg, RADIUS - 2), at(deg + 22, RADIUS - 13), at(deg - 22, RADIUS - 13)];
  return [
    svgEl('line', {x1: MIDDLE, y1: MIDDLE, x2: x, y2: y, class: 'shaft'}),
    svgEl('polygon', {points: head.map((point) => point.join(',')).join(' '), class: 'head'}),
  ];
}

/**
 * @param {number} deg
 * @param {number} radius
 * @returns {[number, number]}
 */
function at(deg, radius) {
  const angle = (deg * Math.PI) / 180;
  return [MIDDLE + radius * Math.sin(angle), MIDDLE - radius * Math.cos(angle)];
}
