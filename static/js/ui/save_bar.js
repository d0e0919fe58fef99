/** Save across the thumb's reach, with the line above it: the fix, then what was saved and its undo. */

import {shown} from '../sheet/shown.js';
import {el, fill, say} from './element.js';
import {OBSERVATION} from './sheet_in_hand.js';

const UNDO_MS = 10_000;
const MARK_MS = 2_000;

/**
 * @param {object} deps
 * @param {() => Promise<{record: string, set: Record<string, unknown>, photos: number} | null>} deps.save null: it was refused
 * @param {(record: string) => Promise<unknown>} deps.undo
 * @param {HTMLElement} deps.beside stands beside the status, always
 * @param {AbortSignal} deps.signal
 */
export function saveBar({save, undo, beside, signal}) {
  const status = el('p', {class: 'status', role: 'status'});
  const back = el('button', {type: 'button', class: 'undo', hidden: true}, 'Undo');
  const mark = el('span', {class: 'mark', 'aria-hidden': 'true'});
  const word = el('span', {}, 'Save');
  const button = el('button', {type: 'button', class: 'save', onclick: () => void press()}, mark, word);
  const element = el('div', {class: 'save_bar'}, el('div', {class: 'status_line'}, status, back, beside), button);
  let fixText = '';
  /** @type {string | null} said in place of the fix */
  let said = null;
  /** @type {ReturnType<typeof setTimeout>[]} */
  let timers = [];
  let refused = false;
  signal.addEventListener('abort', calm);

  function calm() {
    timers.forEach(clearTimeout);
    timers = [];
    said = null;
    refused = false;
    back.hidden = true;
    unmark();
    say(status, fixText);
  }

  function unmark() {
    button.classList.remove('saved');
    fill(mark);
    say(word, 'Save');
  }

  async function press() {
    if (button.getAttribute('aria-busy') === 'true') return;
    button.setAttribute('aria-busy', 'true');
    try {
      const saved = await save();
      if (saved) showSaved(saved);
    } catch (error) {
      calm();
      tell(`Not saved. ${error instanceof Error ? error.message : ''} The sheet is kept: try again, or open the page anew.`);
    } finally {
      button.removeAttribute('aria-busy');
    }
  }

  /** @param {{record: string, set: Record<string, unknown>, photos: number}} saved */
  function showSaved(saved) {
    calm();
    const numbers = savedNumbers(saved.set);
    button.classList.add('saved');
    fill(mark, '✓');
    say(word, `Saved${numbers ? ` ${numbers}` : ''}`);
    tell(`Saved${numbers ? `: ${numbers}` : ''}${saved.photos ? `, ${saved.photos} photo${saved.photos > 1 ? 's' : ''}` : ''}.`);
    back.hidden = false;
    back.onclick = () => {
      calm();
      undo(saved.record).then(() => tell('Undone: crossed out.'), () => tell('Not undone. Try again from the list of today.'));
    };
    timers = [setTimeout(unmark, MARK_MS), setTimeout(calm, UNDO_MS)];
  }

  /** @param {string} text */
  function tell(text) {
    said = text;
    say(status, text);
  }

  return {
    element,
    /** @param {string} text how the fix stands */
    showFix(text) {
      fixText = text;
      if (said === null) say(status, text);
    },
    calm,
    /** @param {string} text why nothing was saved; stands until something is answered */
    refuse(text) {
      calm();
      refused = true;
      tell(text);
    },
    forgive() {
      if (refused) calm();
    },
  };
}

/**
 * The numbers that were read, as the mark shows them.
 * @param {Record<string, unknown>} set
 */
function savedNumbers(set) {
  const measures = OBSERVATION.fields.filter((field) => field.measure && typeof set[field.name] === 'number');
  return measures.map((field) => shown(field, set[field.name])).join(', ');
}
