/**
 * Making elements and watching values: all the machinery the screens need.
 * Data reaches the page as text only; nothing here takes markup.
 */

/** @typedef {Node | string | number | null | undefined | false} Child */
/** @typedef {Record<string, unknown>} Attributes */

const SVG = 'http://www.w3.org/2000/svg';

/**
 * An element with attributes, listeners (`onclick: function`) and children.
 * `true` sets an empty attribute; false, null and undefined set none.
 * @template {keyof HTMLElementTagNameMap} K
 * @param {K} tag
 * @param {Attributes} [attributes]
 * @param {...(Child | Child[])} children
 * @returns {HTMLElementTagNameMap[K]}
 */
export function el(tag, attributes = {}, ...children) {
  const element = document.createElement(tag);
  dress(element, attributes);
  element.append(...nodes(children));
  return element;
}

/**
 * An SVG element.
 * @template {keyof SVGElementTagNameMap} K
 * @param {K} tag
 * @param {Attributes} [attributes]
 * @param {...(Child | Child[])} children
 * @returns {SVGElementTagNameMap[K]}
 */
export function svgEl(tag, attributes = {}, ...children) {
  const element = document.createElementNS(SVG, tag);
  dress(element, attributes);
  element.append(...nodes(children));
  return element;
}

/**
 * Give `element` exactly these children.
 * @param {Element} element
 * @param {...(Child | Child[])} children
 */
export function fill(element, ...children) {
  element.replaceChildren(...nodes(children));
}

/**
 * Change a text only where it differs, so that screen readers and selections are left alone.
 * @param {Element} element
 * @param {string} text
 */
export function say(element, text) {
  if (element.textContent !== text) element.textContent = text;
}

/**
 * @param {Element} element
 * @param {Attributes} attributes
 */
function dress(element, attributes) {
  for (const [name, value] of Object.entries(attributes)) {
    if (name.startsWith('on') && typeof value === 'function') {
      element.addEventListener(name.slice(2), /** @type {EventListener} */ (value));
    } else if (name === 'value' || name === 'checked' || name === 'disabled' || name === 'selected') {
      /** @type {any} */ (element)[name] = value ?? '';
    } else if (value === true) {
      element.setAttribute(name, '');
    } else if (value !== false && value !== null && value !== undefined) {
      element.setAttribute(name, String(value));
    }
  }
}

/**
 * @param {(Child | Child[])[]} children
 * @returns {(Node | string)[]}
 */
function nodes(children) {
  /** @type {(Node | string)[]} */
  const kept = [];
  for (const child of children.flat()) {
    if (child === null || child === undefined || child === false) continue;
    kept.push(child instanceof Node ? child : String(child));
  }
  return kept;
}

/**
 * A value that can be watched.
 * @template T
 * @typedef {object} Watched
 * @property {() => T} get
 * @property {(value: T) => void} set tells the listeners where the value is another
 * @property {(listener: (value: T) => void, signal?: AbortSignal) => () => void} watch
 */

/**
 * @template T
 * @param {T} first
 * @returns {Watched<T>}
 */
export function watched(first) {
  let value = first;
  /** @type {Set<(value: T) => void>} */
  const listeners = new Set();
  return {
    get: () => value,
    set(next) {
      if (Object.is(next, value)) return;
      value = next;
      for (const listener of [...listeners]) listener(value);
    },
    watch(listener, signal) {
      listeners.add(listener);
      const stop = () => void listeners.delete(listener);
      signal?.addEventListener('abort', stop, {once: true});
      return stop;
    },
  };
}
