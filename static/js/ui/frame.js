/** What stands around every screen: the top line, and the four places at the thumb. */

import {el, fill, say} from './element.js';
import {count} from './figures.js';

/** @typedef {import('./parts.js').Parts} Parts */
/** @typedef {import('./parts.js').PlaceName} PlaceName */

/** @type {[PlaceName, string][]} */
const PLACES = [['place', 'Place'], ['reading', 'Reading'], ['finding', 'Finding'], ['hand_over', 'Hand over']];
/** @type {Partial<Record<PlaceName, PlaceName>>} screens without a place of their own, and where they belong */
const BELONGS = {today: 'reading', observation: 'reading'};

/**
 * @param {HTMLElement} root
 * @param {Record<PlaceName, import('./parts.js').Mount>} screens
 */
export function createFrame(root, screens) {
  const site = el('strong', {class: 'site', dir: 'auto'});
  const here = el('span', {class: 'here'});
  const today = el('button', {type: 'button', class: 'top', 'aria-label': 'Readings of today', onclick: () => go('today')}, site, here);
  const unsent = el('button', {type: 'button', class: 'unsent', onclick: () => go('hand_over')});
  const main = el('main', {tabindex: '-1'});
  const dock = el('div', {class: 'dock'});
  const places = PLACES.map(([name, label]) => el('button', {type: 'button', 'data-place': name, onclick: () => go(name)}, label));
  fill(root, el('header', {}, today, unsent), main, dock, el('nav', {'aria-label': 'Places'}, places));

  /** @type {Parts | null} */
  let parts = null;
  /** @type {import('./parts.js').Screen | null} */
  let screen = null;
  let leaving = new AbortController();

  /**
   * @param {PlaceName} name
   * @param {string} [detail]
   */
  function go(name, detail = '') {
    if (!parts) return;
    leaving.abort();
    screen?.remove();
    leaving = new AbortController();
    fill(main);
    fill(dock);
    main.scrollTop = 0;
    root.dataset.screen = name;
    const place = BELONGS[name] ?? name;
    places.forEach((button) => button.dataset.place === place ? button.setAttribute('aria-current', 'page') : button.removeAttribute('aria-current'));
    screen = screens[name]({main, dock, signal: leaving.signal, detail}, parts);
    top();
  }

  function top() {
    if (!parts) return;
    const {notebook, hand} = parts;
    const values = hand.values();
    const row = notebook.sites().find((other) => other.record === values.site);
    const readings = row ? notebook.observations({site: row.record}).filter((other) => !other.crossed_out).length : 0;
    say(site, row?.name ?? 'No site chosen');
    say(here, row ? `${values.bedform ? `dune ${values.bedform} · ` : ''}${count(readings, 'reading')} here` : notebook.survey()?.name ?? '');
    const {unsent: entries, unsentPhotos} = notebook.counts();
    const n = notebook.observations().filter((other) => !other.atBase).length;
    fill(unsent, el('b', {}, n || entries || unsentPhotos), el('span', {}, n || !(entries || unsentPhotos) ? 'on this phone only' : entries ? 'edits on this phone only' : 'photos on this phone only'));
    unsent.classList.toggle('some', entries + unsentPhotos > 0);
  }

  return {
    go,
    /** @param {Parts} opened */
    open(opened) {
      parts = opened;
      opened.notebook.onChange(() => {
        top();
        screen?.update?.();
      });
      opened.hand.watch(top);
    },
    close() {
      leaving.abort();
      screen?.remove();
      screen = parts = null;
      fill(root);
    },
  };
}
