/** The fix as it settles, how it fits the site, and coordinates typed in its place. */

import {typedPlace} from '../science/typed_place.js';
import {el, fill, say} from './element.js';
import {bearing, compassPoint, count, distance, latLon, metres, span} from './figures.js';
import {freshFix} from './late_fixes.js';
import {wayTo} from './site_list.js';

/** @typedef {import('./parts.js').Parts} Parts */

const WIDEST_M = 30;

/**
 * @param {Parts} parts
 */
export function fixPanel(parts) {
  const {position, hand} = parts;
  const accuracy = el('p', {class: 'accuracy'});
  const bar = el('span', {class: 'bar_fill'});
  const facts = el('p', {class: 'help'});
  const fits = el('p', {class: 'question'});
  const typed = typedPanel(parts);
  const element = el(
    'section',
    {class: 'fix', 'aria-label': 'Position'},
    accuracy,
    el('div', {class: 'bar', 'aria-hidden': 'true'}, bar),
    facts,
    fits,
    typed.element,
  );

  function show() {
    const {status, fix} = position.state();
    const age = position.age() ?? 0;
    const waits = {
      denied: 'Position is not allowed for this page. Allow it in the browser\'s settings for this address, or type coordinates.',
      unavailable: 'The phone finds no position. Step into the open, or type coordinates.',
    };
    const values = hand.values();
    if (typeof values.lat_deg === 'number' && typeof values.lon_deg === 'number') {
      fill(accuracy, el('b', {}, 'Typed'), ' for the next reading');
      say(facts, latLon(values.lat_deg, values.lon_deg));
    } else if (fix) {
      fill(accuracy, el('b', {}, `±${metres(fix.accuracy_m)}`), ` ${count(fix.fixes_n, 'fix', 'fixes')}${fix.fixes_n > 1 ? ` averaged, spread ${metres(fix.fixes_spread_m)}` : ''}`);
      say(facts, `${latLon(fix.lat_deg, fix.lon_deg)}, ${span(age)} old${fix.altitude_m === null ? '' : `, ${Math.round(fix.altitude_m)} m high`}`);
    } else {
      fill(accuracy, el('b', {}, 'No fix'));
      say(facts, status === 'denied' || status === 'unavailable' ? waits[status] : 'Waiting for the first fix. Saving does not wait for it.');
    }
    const width = fix ? Math.round(Math.min(1, fix.accuracy_m / WIDEST_M) * 20) : 0;
    bar.className = `bar_fill w${width}`;
    say(fits, misfit(parts));
    fits.hidden = !fits.textContent;
    typed.show();
  }

  return {element, show};
}

/** Where the place does not fit the chosen site. @param {Parts} parts */
function misfit({notebook, hand, position}) {
  const values = hand.values();
  const site = notebook.sites().find((row) => row.record === values.site);
  const typed = typeof values.lat_deg === 'number' ? /** @type {any} */ ({...values, accuracy_m: 0}) : null;
  const place = typed ?? freshFix(position);
  if (!site?.radius_m || !place) return '';
  const {distance_m: off, bearing_deg: deg} = wayTo(place, site);
  if (off <= site.radius_m + 2 * place.accuracy_m) return '';
  return `You are outside ${site.name}: its middle is ${distance(off)} away, ${compassPoint(deg)} ${bearing(deg, 0)}. Is this the right site?`;
}

/** @param {Parts} parts */
function typedPanel({hand}) {
  const problem = el('p', {class: 'problem', role: 'alert', hidden: true});
  const input = el('input', {
    type: 'text',
    'aria-label': 'Coordinates, WGS 84',
    'aria-describedby': 'typed-forms',
    autocomplete: 'off',
    placeholder: '-24.7297, 15.3420',
    onkeydown: (/** @type {KeyboardEvent} */ event) => event.key === 'Enter' && use(),
  });
  const forms = el('p', {class: 'help', id: 'typed-forms'}, 'WGS 84: degrees as -24.7297, 15.3420 or 24 43 46.9 S, 15 20 31.2 E; or UTM as zone, N or S, easting, northing: 33 S 534586 7264938.');
  const clear = el('button', {type: 'button', onclick: () => put(null)}, 'Use the fix again');
  const details = el('details', {class: 'typed'}, el('summary', {}, 'Type coordinates instead'), input, forms, problem, el('div', {class: 'two'}, clear, el('button', {type: 'button', class: 'strong', onclick: use}, 'Use these')));

  function use() {
    problem.hidden = true;
    try {
      put(typedPlace(input.value));
    } catch (error) {
      say(problem, error instanceof RangeError ? error.message : String(error));
      problem.hidden = false;
    }
  }

  /** @param {{lat_deg: number, lon_deg: number} | null} place */
  function put(place) {
    hand.set('lat_deg', place ? Number(place.lat_deg.toFixed(7)) : undefined);
    hand.set('lon_deg', place ? Number(place.lon_deg.toFixed(7)) : undefined);
    hand.set('fix_method', place ? 'typed' : undefined);
  }

  return {
    element: details,
    show() {
      clear.disabled = typeof hand.values().lat_deg !== 'number';
    },
  };
}
