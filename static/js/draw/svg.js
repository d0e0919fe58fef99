/** Shapes to SVG elements; the mirror of fieldlog/draw/svg.py, which writes text instead. */

/** @typedef {import('./marks.js').Shape} Shape */
/** @typedef {import('./marks.js').Command} Command */
/** @typedef {import('./rose.js').Rose} Rose */

const SVG = 'http://www.w3.org/2000/svg';

/**
 * What a copy without static/css/rose.css shows, by the role of each group.
 * @type {Record<string, Record<string, string>>}
 */
export const PAINT = {
  'rose-petal': { fill: '#e4d5ba' },
  'rose-rim': { fill: 'none', stroke: '#7b7062' },
  'rose-tick': { stroke: '#7b7062' },
  'rose-north': { stroke: '#1c1915', 'stroke-width': '2' },
  'rose-letter': { fill: '#1c1915' },
  'rose-threshold': { fill: 'none', stroke: '#7b7062', 'stroke-dasharray': '3 3' },
  'rose-dot': { fill: '#1c1915' },
  'rose-end': { fill: '#fffdf8', stroke: '#1c1915' },
  'rose-marked': { fill: 'none', stroke: '#8e3516', 'stroke-width': '1.5' },
  'rose-crossed-out': { fill: 'none', stroke: '#1c1915' },
  'rose-mean': { fill: '#1c1915', stroke: '#fffdf8' },
  'rose-mean-hollow': { fill: '#fffdf8', stroke: '#1c1915', 'stroke-width': '1.5' },
  'rose-interval': { fill: 'none', stroke: '#1c1915', 'stroke-width': '2' },
  'rose-mode': { stroke: '#1c1915', 'stroke-width': '3' },
  'rose-expected': { fill: 'none', stroke: '#1c1915', 'stroke-width': '1.5' },
  'rose-wind': { fill: '#1c1915', stroke: '#1c1915', 'stroke-width': '1.5' },
  'rose-figure': { fill: '#1c1915', 'font-weight': '700' },
  'rose-empty': { fill: '#574f44' },
};

/**
 * The rose as a fresh element with its text twin.
 * @param {Rose} rose
 * @param {{identifier?: string, classes?: string, document?: Document}} [options] `identifier` makes the ids of
 *   title and description unique on a page that shows several; `classes` are added to the element's own
 * @returns {SVGSVGElement}
 */
export function svg(rose, { identifier = 'rose', classes = '', document = globalThis.document } = {}) {
  const size = number(rose.size);
  const root = /** @type {SVGSVGElement} */ (make(document, 'svg', {
    class: `rose rose-${rose.detail} ${classes}`.trim(),
    viewBox: `0 0 ${size} ${size}`,
    width: size,
    height: size,
    role: 'img',
    'aria-labelledby': `${identifier}-title ${identifier}-text`,
  }));
  root.append(
    make(document, 'title', { id: `${identifier}-title` }, rose.title),
    make(document, 'desc', { id: `${identifier}-text` }, rose.text),
  );
  let role = '';
  /** @type {Element} */
  let group = root;
  for (const shape of rose.shapes) {
    if (shape.role !== role) {
      role = shape.role;
      group = make(document, 'g', { class: role, ...PAINT[role] });
      root.append(group);
    }
    group.append(element(document, shape));
  }
  return root;
}

/**
 * One shape as an SVG element without paint.
 * @param {Document} document
 * @param {Shape} shape
 * @returns {Element}
 */
function element(document, shape) {
  if (shape.kind === 'text') {
    return make(document, 'text', {
      x: number(shape.x),
      y: number(shape.y),
      'font-size': number(shape.size),
      'text-anchor': 'middle',
      'dominant-baseline': 'central',
    }, shape.text);
  }
  if (shape.kind === 'path') return make(document, 'path', { d: pathData(shape.commands) });
  const { kind, role: _role, ...numbers } = shape;
  return make(document, kind, Object.fromEntries(Object.entries(numbers).map(([name, v]) => [name, number(v)])));
}

/**
 * Commands as the text of a path's `d`.
 * @param {readonly Command[]} commands
 * @returns {string}
 */
export function pathData(commands) {
  return commands.map(([letter, ...numbers]) => letter + numbers.map(number).join(' ')).join('');
}

/**
 * Hundredths of a pixel are enough; no trailing zeros.
 * @param {number} value
 * @returns {string}
 */
export function number(value) {
  return String(Math.round(value * 100) / 100 || 0);
}

/**
 * @param {Document} document
 * @param {string} name
 * @param {Record<string, string>} attributes
 * @param {string} [text]
 * @returns {Element}
 */
function make(document, name, attributes, text) {
  const made = document.createElementNS(SVG, name);
  for (const [key, value] of Object.entries(attributes)) made.setAttribute(key, value);
  if (text !== undefined) made.textContent = text;
  return made;
}
