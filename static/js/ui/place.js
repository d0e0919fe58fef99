/** Place: where I stand. The site, the dune and what it is, and the fix. */

import {askedFields} from '../sheet/blocks.js';
import {el, fill, say} from './element.js';
import {fixPanel} from './fix_panel.js';
import {referable} from './parts.js';
import {plainField} from './plain_field.js';
import {OBSERVATION} from './sheet_in_hand.js';
import {siteList} from './site_list.js';

const TICK_MS = 1000;

/** @type {import('./parts.js').Mount} */
export function mountPlace({main, dock, signal}, parts) {
  const {notebook, hand, position} = parts;
  const sites = siteList(parts);
  const fix = fixPanel(parts);
  const dune = duneStepper(hand);
  const group = OBSERVATION.fields.find((field) => field.name === 'bedform')?.group;
  const about = askedFields(OBSERVATION, notebook.survey()?.optional_fields ?? []).filter(
    (field) => field.group === group && !['site', 'bedform'].includes(field.name),
  );
  const fields = about.map((field) => ({field, widget: plainField(field, (value) => hand.set(field.name, value), referable(notebook))}));
  fill(
    main,
    el('h1', {}, 'Site'),
    sites.element,
    el('h2', {}, 'Dune'),
    dune.element,
    fields.map(({widget}) => widget.element),
    el('h2', {}, 'Position'),
    fix.element,
  );
  fill(dock, el('button', {type: 'button', class: 'save', onclick: () => parts.go('reading')}, 'Read here'));

  function show() {
    sites.show();
    dune.show();
    fields.forEach(({field, widget}) => widget.show(hand.values()[field.name]));
    fix.show();
  }

  hand.watch(show, signal);
  position.watch(() => {
    sites.show();
    fix.show();
  }, signal);
  const tick = setInterval(fix.show, TICK_MS);
  position.start();
  sites.order();
  show();
  return {
    update: show,
    remove() {
      clearInterval(tick);
      position.stop();
    },
  };
}

/**
 * The dune's number, one up or down, and the next dune in one touch.
 * @param {import('./sheet_in_hand.js').SheetInHand} hand
 */
function duneStepper(hand) {
  const number = el('output', {class: 'dune_number', 'aria-label': 'Dune number'});
  const less = el('button', {type: 'button', 'aria-label': 'Dune before', onclick: () => hand.set('bedform', Number(hand.values().bedform) - 1)}, '−');
  const more = el('button', {type: 'button', class: 'next_dune', onclick: hand.nextDune}, 'Next dune');
  return {
    element: el('div', {class: 'dune_stepper'}, less, number, more),
    show() {
      const value = hand.values().bedform;
      say(number, value === undefined ? '–' : String(value));
      less.disabled = !(Number(value) > 1);
      say(more, value === undefined ? 'First dune' : 'Next dune');
    },
  };
}
