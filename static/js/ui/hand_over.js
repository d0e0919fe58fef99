/** Hand over: what is on this phone only, sending it, and all that is set rather than read. */

import {CONSTANTS} from '../sheet/declared.js';
import {chips} from './choice.js';
import {el, fill, say} from './element.js';
import {count, size, span} from './figures.js';
import {THEMES} from './theme.js';
import {wayOut} from './way_out.js';

/** @typedef {import('./parts.js').Parts} Parts */

const OLD_MS = 12 * 3600_000;
const SHORT_BYTES = 200e6;
const SHORT_SHARE = 0.8;

/** @type {import('./parts.js').Mount} */
export function mountHandOver({main, dock, signal}, parts) {
  const {notebook, hand, shell, theme} = parts;
  const held = el('p', {class: 'held'});
  const state = el('p', {class: 'state', role: 'status'});
  const progress = el('progress', {'aria-label': 'Handing over'});
  const problems = el('div');
  const storage = el('section');
  const version = el('section');
  const looks = chips('Look', THEMES.map(([value, label]) => ({value, label})), (value) => {
    const chosen = THEMES.find(([name]) => name === value)?.[0] ?? 'system';
    void theme.choose(chosen);
    looks.show(chosen);
  });
  const now = el('button', {type: 'button', class: 'save', onclick: () => void notebook.handover.now()}, 'Hand over now');
  const {name, crewName, device} = notebook.info;
  fill(
    main,
    el('h1', {}, 'Hand over'),
    held,
    state,
    progress,
    problems,
    wayOut(parts),
    storage,
    el('h2', {}, 'Look'),
    looks.element,
    el('details', {class: 'cautions'}, el('summary', {}, 'Cautions'), el('ul', {}, CONSTANTS.cautions.map((text) => el('li', {}, text)))),
    el('h2', {}, 'Survey'),
    el('p', {dir: 'auto'}, `${name}`),
    el('p', {dir: 'auto', class: 'help'}, `You are ${crewName || 'not named yet'}. This phone is ${device}.`),
    el('button', {type: 'button', class: 'wide', onclick: parts.switchSurvey}, 'Another survey, or join one'),
    version,
  );
  fill(dock, now);
  looks.show(theme.get());

  function update() {
    const {unsent, unsentPhotos, oldestUnsentAt, setAside} = notebook.counts();
    const readings = notebook.observations().filter((row) => !row.atBase).length;
    const nothing = !unsent && !unsentPhotos;
    fill(held, el('b', {}, readings || unsent || unsentPhotos), ` ${nothing ? 'on this phone only: base has everything' : heldText(readings, unsent, unsentPhotos)}`);
    const {phase, sent, of, photosSent, photosOf, lastAt, message, mend} = notebook.handover.state;
    const off = notebook.clockOffMs();
    say(state, stateText(parts, {phase, sent, of, photosSent, photosOf, lastAt}));
    progress.hidden = phase !== 'sending' || !(of + photosOf);
    progress.max = Math.max(1, of + photosOf);
    progress.value = sent + photosSent;
    now.setAttribute('aria-busy', String(phase === 'sending'));
    const age = oldestUnsentAt ? parts.clock() - Date.parse(oldestUnsentAt) : 0;
    fill(
      problems,
      message && phase !== 'offline' && problem(message, mend),
      setAside > 0 && problem(`Base could not keep ${count(setAside, 'entry', 'entries')}.`, 'They stay here. Open the readings marked on Today and mend what is said there.'),
      setAsideLines(parts),
      age > OLD_MS && problem(`The oldest is ${span(age)} old and exists only here.`, 'Hand over as soon as there is a connection: a lost phone loses it.'),
      off !== 0 && problem(`This phone's clock is ${span(Math.abs(off))} ${off > 0 ? 'behind' : 'ahead'}.`, 'Set it by the network; times already saved carry the difference.'),
    );
    fill(version, ...versionLines(parts, hand.isBegun()));
  }

  async function showStorage() {
    const {storage: manager} = parts;
    const isKept = (await manager?.persisted?.()) ?? false;
    const estimate = (await manager?.estimate?.()) ?? {};
    if (signal.aborted) return;
    const free = (estimate.quota ?? 0) - (estimate.usage ?? 0);
    const isShort = estimate.quota !== undefined && (free < SHORT_BYTES || (estimate.usage ?? 0) > SHORT_SHARE * estimate.quota);
    const freeable = notebook.freeableBytes();
    fill(
      storage,
      el('h2', {}, 'Kept on this phone'),
      el('p', {}, isKept ? 'The browser has promised not to clear this notebook.' : 'The browser may clear this notebook when the phone runs out of space.'),
      !isKept && el('button', {type: 'button', class: 'wide', onclick: () => void manager?.persist?.().then(showStorage)}, 'Ask the browser to keep it'),
      !isKept && el('p', {class: 'help'}, 'Installing Ergbook on the home screen helps. A hand-over is the only other copy.'),
      isShort && problem('Little space is left on this phone.', 'Free photos that base holds, or delete other things: a full phone cannot save.'),
      freeable > 0 && el('button', {type: 'button', class: 'wide', onclick: () => void notebook.freePhotos().then(showStorage)}, `Free ${size(freeable)}: photos that base holds`),
      estimate.quota !== undefined && el('p', {class: 'help'}, `${size(estimate.usage ?? 0)} used, ${size(free)} free for it.`),
      el('p', {class: 'help'}, shell.offline.get() ? 'Opens without a network.' : 'Does not open without a network yet: stay connected until this line changes.'),
    );
  }

  hand.watch(update, signal);
  shell.waiting.watch(update, signal);
  shell.offline.watch(() => void showStorage(), signal);
  const tick = setInterval(update, 20_000);
  update();
  void showStorage();
  return {update, remove: () => clearInterval(tick)};
}

/** @param {number} readings @param {number} entries @param {number} photos */
function heldText(readings, entries, photos) {
  const parts = [
    readings && (readings === 1 ? 'reading' : 'readings'),
    !readings && entries && (entries === 1 ? 'edit' : 'edits'),
    photos && (readings || entries ? `and ${count(photos, 'photo')}` : photos === 1 ? 'photo' : 'photos'),
  ].filter(Boolean);
  return `${parts.join(' ')} on this phone only`;
}

/**
 * @param {Parts} parts
 * @param {Pick<import('../handover/notebook.js').HandoverState, 'phase' | 'sent' | 'of' | 'photosSent' | 'photosOf' | 'lastAt'>} state
 */
function stateText({clock}, {phase, sent, of, photosSent, photosOf, lastAt}) {
  const last = lastAt ? ` Last hand-over ${span(clock() - Date.parse(lastAt))} ago.` : ' Not handed over since this page was opened.';
  if (phase === 'sending') return of + photosOf ? `Handing over: ${sent} of ${count(of, 'entry', 'entries')}${photosOf ? `, ${photosSent} of ${count(photosOf, 'photo')}` : ''}.` : 'Asking base for what is new.';
  if (phase === 'offline') return `No connection to base. It is tried again by itself.${last}`;
  if (phase === 'idle') return `Hands over by itself when there is a connection.${last}`;
  return `Not handed over.${last}`;
}

/** @param {string} what @param {string} mend */
function problem(what, mend) {
  return el('p', {class: 'question'}, el('b', {}, what), ` ${mend}`);
}

/** @param {Parts} parts */
function setAsideLines(parts) {
  const rows = parts.notebook.observations().filter((row) => row.setAside.length);
  return rows.map((row) => el('button', {type: 'button', class: 'wide', onclick: () => parts.go('observation', row.record)}, row.setAside[0].problem));
}

/** @param {Parts} parts @param {boolean} begun */
function versionLines({shell}, begun) {
  const lines = [el('h2', {}, 'Version'), el('p', {class: 'help'}, `Ergbook ${shell.app}, shell ${shell.shell}`)];
  if (!shell.waiting.get()) return lines;
  const take = el('button', {type: 'button', class: 'wide', disabled: begun, onclick: shell.take}, 'Take the new version now');
  return [...lines, el('p', {class: 'question'}, `A new version is ready. ${begun ? 'Save or clear the reading in hand first.' : 'It changes no reading.'}`), take];
}
