/** The sites of the survey, nearest first, to choose where one stands. */

import {way} from '../science/geodesy.js';
import {label} from '../sheet/shown.js';
import {el, fill, say} from './element.js';
import {bearing, compassPoint, count, distance} from './figures.js';

const SHOWN = 4;

/** @typedef {import('./parts.js').Parts} Parts */
/** @typedef {ReturnType<import('./parts.js').Notebook['sites']>[number]} Site */

/**
 * @param {Parts} parts
 */
export function siteList({notebook, hand, position}) {
  let all = false;
  let filter = '';
  /** @type {{site: Site, line: HTMLElement, way: HTMLElement}[]} */
  let lines = [];
  let ordered = false;
  const search = el('input', {
    type: 'search',
    dir: 'auto',
    'aria-label': 'Find a site by its name',
    placeholder: 'Find by name',
    autocomplete: 'off',
    oninput: () => {
      filter = search.value.trim().toLocaleLowerCase();
      order();
    },
  });
  const list = el('ul', {class: 'sites'});
  const more = el('button', {type: 'button', class: 'wide', onclick: () => {
    all = !all;
    order();
  }});
  const element = el('section', {class: 'site_list', 'aria-label': 'Sites'}, search, list, more);

  /** Order the list anew: when it is opened, when the first fix comes, when it is asked for. */
  function order() {
    const sites = notebook.sites().filter((site) => !site.crossed_out);
    const named = sites.filter((site) => !filter || (site.name ?? '').toLocaleLowerCase().includes(filter));
    const fix = position.state().fix;
    ordered = fix !== null;
    named.sort((a, b) => (fix ? wayTo(fix, a).distance_m - wayTo(fix, b).distance_m : (a.name ?? '').localeCompare(b.name ?? '')));
    const chosen = named.findIndex((site) => site.record === hand.values().site);
    let shown = all || filter ? named : named.slice(0, SHOWN);
    if (chosen >= SHOWN && !shown.includes(named[chosen])) shown = [named[chosen], ...shown.slice(0, SHOWN - 1)];
    lines = shown.map(line);
    fill(list, lines.map((made) => made.line));
    if (!sites.length) fill(list, el('li', {class: 'empty'}, 'No sites yet. The lead adds them at base; hand over to receive them.'));
    else if (!named.length) fill(list, el('li', {class: 'empty'}, 'No site of that name.'));
    search.hidden = sites.length <= 2 * SHOWN;
    more.hidden = Boolean(filter) || sites.length <= SHOWN;
    say(more, all ? 'Show the nearest only' : `Show all ${sites.length} sites`);
    show();
  }

  /** @param {Site} site */
  function line(site) {
    const readings = notebook.observations({site: site.record}).filter((row) => !row.crossed_out).length;
    const where = el('span', {class: 'way'});
    const about = [site.dune_pattern, site.dune_rule && label('dune_rule', site.dune_rule), site.note].filter(Boolean);
    const button = el(
      'button',
      {type: 'button', 'data-site': site.record, onclick: () => hand.set('site', site.record)},
      el('span', {class: 'name'}, el('bdi', {}, site.name), el('span', {class: 'chosen_mark'}, ' · chosen')),
      el('span', {class: 'about'}, where, el('span', {class: 'count'}, count(readings, 'reading'))),
    );
    const more = el('p', {class: 'help', dir: 'auto'}, about.join(' · '));
    return {site, line: el('li', {}, button, about.length > 0 && more), way: where};
  }

  /** Distances and the chosen mark, without moving a line. */
  function show() {
    const fix = position.state().fix;
    if (fix && !ordered) return order();
    for (const {site, line: made, way: where} of lines) {
      const chosen = site.record === hand.values().site;
      made.classList.toggle('chosen', chosen);
      if (made.children[1] instanceof HTMLElement) made.children[1].hidden = !chosen;
      made.firstElementChild?.setAttribute('aria-pressed', String(chosen));
      say(where, fix ? wayText(fix, site) : '');
    }
  }

  return {element, order, show};
}

/**
 * @param {{lat_deg: number, lon_deg: number}} from
 * @param {Site} site
 */
export function wayTo(from, site) {
  return way(from.lat_deg, from.lon_deg, site.lat_deg ?? 0, site.lon_deg ?? 0);
}

/**
 * @param {{lat_deg: number, lon_deg: number}} from
 * @param {Site} site
 */
function wayText(from, site) {
  const {distance_m: metres, bearing_deg: deg} = wayTo(from, site);
  if (metres <= (site.radius_m ?? 0)) return 'you are here';
  return `${distance(metres)} ${compassPoint(deg)} ${bearing(deg, 0)}`;
}
