/** The whole sheet as a form: one block open, the others one line each. */

import {blocks} from '../sheet/blocks.js';
import {el} from './element.js';
import {sheetBlock} from './sheet_block.js';

/** @typedef {import('./sheet_block.js').Answers} Answers */

/**
 * @param {object} deps
 * @param {import('../sheet/declared.js').SheetDeclaration} deps.sheet
 * @param {Answers} deps.answers
 * @param {string[]} deps.switchedOn optional fields of the survey
 * @param {number | null} deps.stepDeg to which bearings are read
 * @param {import('./sheet_block.js').BlockDeps['referable']} deps.referable
 * @param {HTMLElement} deps.scroller what scrolls
 * @param {AbortSignal} deps.signal
 */
export function sheetForm({sheet, answers, switchedOn, stepDeg, referable, scroller, signal}) {
  /** @type {string | null} */
  let openKey = null;
  const made = blocks(sheet, switchedOn).map((block) => ({
    key: block.key,
    names: [block.measure, ...block.companions, ...block.plain].map((field) => field?.name),
    ...sheetBlock(block, {sheet, answers, referable, stepDeg, toggle, next}),
  }));
  const element = el('div', {class: 'sheet'}, made.map((block) => block.element));

  /** @param {string} key */
  function toggle(key) {
    open(openKey === key ? null : key);
  }

  /**
   * Open one block. The line that was touched stays where it is under the finger.
   * @param {string | null} key
   * @param {boolean} [bringUp] scroll the block to the top instead
   */
  function open(key, bringUp = false) {
    const anchor = made.find((block) => block.key === (key ?? openKey))?.element;
    const before = anchor?.getBoundingClientRect().top ?? 0;
    made.find((block) => block.key === openKey)?.open(false);
    openKey = key;
    made.find((block) => block.key === key)?.open(true);
    if (!anchor) return;
    if (bringUp) scroller.scrollTop += anchor.getBoundingClientRect().top - scroller.getBoundingClientRect().top;
    else scroller.scrollTop += anchor.getBoundingClientRect().top - before;
  }

  /** @param {string} key */
  function next(key) {
    const from = made.findIndex((block) => block.key === key);
    const later = [...made.slice(from + 1), ...made.slice(0, from)];
    open((later.find((block) => block.isEmpty()) ?? made[from + 1] ?? made[from]).key, true);
  }

  answers.watch(() => made.forEach((block) => block.changed()), signal);
  made.forEach((block) => block.show());
  return {
    element,
    open,
    openKey: () => openKey,
    /** @param {string} name of a field @param {string} text what is wrong with it */
    refuse(name, text) {
      const block = made.find((other) => other.names.includes(name));
      if (!block) return;
      if (openKey !== block.key) open(block.key, true);
      block.refuse(text);
    },
    /** The first measure that was answered, else the first there is. @param {Record<string, unknown>} values */
    firstAnswered: (values) => made.find((block) => block.isEmpty() && values[block.key] !== undefined)?.key ?? made.find((block) => block.isEmpty())?.key ?? null,
  };
}
