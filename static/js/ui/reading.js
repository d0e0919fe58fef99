/** Reading: the sheet in hand, and Save. */

import {el, fill} from './element.js';
import {lastReadings} from './observation_line.js';
import {count, metres, span} from './figures.js';
import {referable} from './parts.js';
import {bearingFrame} from './bearing_frame.js';
import {photoStrip} from './photo_strip.js';
import {saveBar} from './save_bar.js';
import {sheetForm} from './sheet_form.js';
import {OBSERVATION} from './sheet_in_hand.js';

const SHOWN_LAST = 3;
const TICK_MS = 1000;

/** @type {import('./parts.js').Mount} */
export function mountReading({main, dock, signal}, parts) {
  const {notebook, hand, position, clock} = parts;
  const names = referable(notebook);
  const answers = {
    values: hand.values,
    set: hand.set,
    isCarried: hand.isCarried,
    watch: hand.watch,
    frame: () => bearingFrame(hand.spot(), clock() + notebook.clockOffMs(), hand.values().north),
  };
  const form = sheetForm({
    sheet: OBSERVATION,
    answers,
    switchedOn: notebook.survey()?.optional_fields ?? [],
    stepDeg: notebook.survey()?.reading_step_deg ?? null,
    referable: names,
    scroller: main,
    signal,
  });
  const strip = photoStrip({photos: hand.photos, change: hand.setPhotos, wanted: () => photosWanted(notebook), signal});
  const last = el('section', {class: 'last', 'aria-label': 'Last readings here'});
  const nextDune = el('button', {type: 'button', class: 'next_dune', onclick: hand.nextDune}, 'Next dune');
  const bar = saveBar({save, undo: hand.undo, beside: nextDune, signal});
  /** What was answered last time decides which measure opens first. */
  let before = lastValues(parts);

  fill(main, el('h1', {class: 'unseen'}, 'Reading'), form.element, strip.element, last);
  fill(dock, bar.element);
  form.open(form.firstAnswered(before), true);

  async function save() {
    const [problem] = hand.problems();
    if (problem) {
      if (problem.field) form.refuse(problem.field, problem.text);
      bar.refuse(`${problem.label}: ${problem.text}`);
      return null;
    }
    const saved = await hand.save();
    parts.vibrate(60);
    before = saved.set;
    form.open(form.firstAnswered(before), true);
    return saved;
  }

  function showLast() {
    const rows = notebook.observations().filter((row) => row.madeBy === notebook.info.crew && row.site === hand.values().site);
    rows.sort((a, b) => (a.observed_at ?? '') < (b.observed_at ?? '') ? 1 : -1);
    fill(last, lastReadings(rows.slice(0, SHOWN_LAST), parts));
  }

  function update() {
    strip.show();
    showLast();
    bar.showFix(fixSentence(parts));
  }

  hand.watch(() => {
    strip.show();
    bar.forgive();
  }, signal);
  position.watch(() => bar.showFix(fixSentence(parts)), signal);
  const tick = setInterval(() => bar.showFix(fixSentence(parts)), TICK_MS);
  position.start();
  update();
  return {
    update,
    remove() {
      clearInterval(tick);
      position.stop();
    },
  };
}

/** @param {import('./parts.js').Parts} parts */
function lastValues({notebook, hand}) {
  const own = notebook.observations().filter((row) => row.madeBy === notebook.info.crew && !row.crossed_out);
  const last = own.reduce((/** @type {Record<string, any>} */ newest, row) => ((newest.madeAt ?? '') > row.madeAt ? newest : row), {});
  return Object.fromEntries(Object.entries({...last, ...hand.values()}).filter(([, value]) => value !== null));
}

/**
 * How the fix stands, for the line above Save.
 * @param {import('./parts.js').Parts} parts
 * @returns {string}
 */
export function fixSentence({position, hand}) {
  const values = hand.values();
  if (typeof values.lat_deg === 'number') return 'Place typed in.';
  const {status, fix} = position.state();
  const age = position.age();
  if (status === 'denied') return 'No fix: position is not allowed for this page. Saving works without.';
  if (status === 'unavailable') return 'No fix: the phone finds no position. Saving works without.';
  if (!fix || age === null || status === 'waiting' && age > 20_000) return 'Waiting for a fix. Saving does not wait.';
  const old = age > 3000 ? `, ${span(age)} old` : '';
  return `Fix ±${metres(fix.accuracy_m)}, ${count(fix.fixes_n, 'fix', 'fixes')}${fix.fixes_n > 1 ? ' averaged' : ''}${old}.`;
}

/** @param {import('./parts.js').Notebook} notebook */
function photosWanted(notebook) {
  const survey = notebook.survey();
  return {longEdgePx: survey?.photo_long_edge_px, isOriginal: survey?.photo_original};
}
