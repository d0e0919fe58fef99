/** Today: every observation of the survey's day, own and others', newest first. */

import {el, fill} from './element.js';
import {count, day} from './figures.js';
import {observationLine} from './observation_line.js';
import {chips} from './choice.js';

const PAGE = 60;

/** @type {import('./parts.js').Mount} */
export function mountToday({main}, parts) {
  const {notebook, clock} = parts;
  let whose = 'all';
  let shown = PAGE;
  const heading = el('h1', {}, 'Today');
  const summary = el('p', {class: 'help'});
  const choice = chips('Whose', [{value: 'all', label: 'all'}, {value: 'own', label: 'mine'}], (value) => {
    whose = value ?? 'all';
    update();
  });
  const list = el('div');
  const back = el('button', {type: 'button', class: 'wide', onclick: () => parts.go('reading')}, 'Back to Reading');
  fill(main, heading, summary, choice.element, list, back);

  function update() {
    choice.show(whose);
    const zone = notebook.survey()?.time_zone;
    const today = day(clock() + notebook.clockOffMs(), zone);
    const rows = notebook.observations().filter((row) => row.observed_at && day(row.observed_at, zone) === today);
    rows.sort((a, b) => ((a.observed_at ?? '') < (b.observed_at ?? '') ? 1 : -1));
    const wanted = rows.filter((row) => whose === 'all' || row.madeBy === notebook.info.crew);
    const crossed = wanted.filter((row) => row.crossed_out).length;
    fill(summary, `${today}: ${count(wanted.length - crossed, 'reading')}${crossed ? `, ${crossed} crossed out` : ''}.`);
    fill(list, wanted.length ? bySite(wanted.slice(0, shown)) : el('p', {class: 'empty'}, 'No readings today yet. Save the first one on Reading.'));
    if (wanted.length > shown) {
      list.append(el('button', {type: 'button', class: 'wide', onclick: () => more()}, `Show ${Math.min(PAGE, wanted.length - shown)} more`));
    }
  }

  function more() {
    shown += PAGE;
    update();
  }

  /** @param {ReturnType<typeof notebook.observations>} rows */
  function bySite(rows) {
    const sites = [...new Set(rows.map((row) => row.site))];
    return sites.flatMap((site) => {
      const questions = parts.questions.at(site);
      const name = notebook.sites().find((row) => row.record === site)?.name ?? 'a site that has not arrived yet';
      const here = rows.filter((row) => row.site === site);
      return [
        el('h2', {dir: 'auto'}, name),
        el('ul', {class: 'observations'}, here.map((row) => observationLine(row, parts, questions.get(row.record) ?? []))),
      ];
    });
  }

  update();
  return {update, remove: () => undefined};
}
