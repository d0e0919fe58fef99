/** Crossing an observation out, with its reason, and taking that back. */

import {el, fill, say} from './element.js';

const REASONS = ['misread', 'wrong dune', 'wrong site', 'read twice', 'practice'];
const LONGEST = 200;

/**
 * @param {object} deps
 * @param {() => string | null} deps.reason why it is crossed out, null while it stands
 * @param {(reason: string | null) => Promise<unknown>} deps.say
 */
export function crossOut({reason, say: speak}) {
  const message = el('p', {class: 'problem', role: 'alert', hidden: true});
  const body = el('div');
  const element = el('section', {class: 'cross_out', 'aria-label': 'Cross out'}, body, message);
  let asking = false;

  /** @param {string | null} text */
  async function send(text) {
    message.hidden = true;
    try {
      await speak(text);
      asking = false;
      show();
    } catch (error) {
      say(message, `Not saved. ${error instanceof Error ? error.message : ''} Try again.`);
      message.hidden = false;
    }
  }

  function ask() {
    const input = el('input', {type: 'text', dir: 'auto', maxlength: LONGEST, 'aria-label': 'Reason', placeholder: 'or another reason', autocomplete: 'off'});
    const go = () => (input.value.trim() ? void send(input.value.trim()) : input.focus());
    return [
      el('p', {}, 'Why? A crossed out reading stays in the notebook and counts for nothing.'),
      el('div', {class: 'chips', role: 'group', 'aria-label': 'Reasons'}, REASONS.map((text) => el('button', {type: 'button', onclick: () => void send(text)}, text))),
      input,
      el('div', {class: 'two'}, el('button', {type: 'button', onclick: close}, 'Leave it'), el('button', {type: 'button', class: 'strong', onclick: go}, 'Cross out with this reason')),
    ];
  }

  function close() {
    asking = false;
    show();
  }

  function open() {
    asking = true;
    show();
  }

  let before = '';
  function show() {
    const why = reason();
    const state = `${why}|${asking}`;
    if (state === before) return; // keep what is being typed
    before = state;
    if (why) fill(body, el('p', {dir: 'auto'}, `Crossed out: ${why}`), el('button', {type: 'button', class: 'wide', onclick: () => void send(null)}, 'Take back the crossing out'));
    else if (asking) fill(body, ask());
    else fill(body, el('button', {type: 'button', class: 'wide', onclick: open}, 'Cross out'));
  }

  return {element, show};
}
