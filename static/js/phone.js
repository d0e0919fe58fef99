/** The phone: the only place where its parts are put together. */

import {browserDeps, join, listNotebooks, lookCode, openNotebook} from './handover/notebook.js';
import {summariseApart} from './science/summarise_apart.js';
import {createPosition} from './sensors/position.js';
import {el, fill} from './ui/element.js';
import {mountFinding} from './ui/finding.js';
import {createFrame} from './ui/frame.js';
import {mountHandOver} from './ui/hand_over.js';
import {inWords, mountJoin} from './ui/join.js';
import {mountObservation} from './ui/observation_page.js';
import {mountPlace} from './ui/place.js';
import {openQuestions} from './ui/questions_here.js';
import {mountReading} from './ui/reading.js';
import {openSheet} from './ui/sheet_in_hand.js';
import {createShellUpdate} from './ui/shell_update.js';
import {createSummaries} from './ui/summaries.js';
import {openTheme} from './ui/theme.js';
import {mountToday} from './ui/today.js';
import {vouchForOwnScripts} from './ui/trusted.js';

/** @typedef {import('./handover/notebook.js').OpenNotebook} OpenNotebook */

const root = /** @type {HTMLElement} */ (document.getElementById('phone'));
/** @type {{app: string, shell: string}} */
const start = JSON.parse(document.getElementById('start')?.textContent ?? '{}');
vouchForOwnScripts();
const clock = () => Date.now();
const deps = browserDeps({app: start.app, base: new URL('..', location.href).href.replace(/\/$/, '')});
const shell = createShellUpdate({...start, workers: navigator.serviceWorker, reload: () => location.reload()});
const summaries = createSummaries(summariseApart());
const position = createPosition({geolocation: navigator.geolocation, clock, page: document});

/** @param {OpenNotebook} notebook */
async function show(notebook) {
  rememberSurvey(notebook.info.survey);
  const theme = await openTheme(notebook, document.documentElement);
  const hand = await openSheet({notebook, position, clock});
  const questions = await openQuestions(notebook);
  const frame = createFrame(root, {
    place: mountPlace,
    reading: mountReading,
    finding: mountFinding,
    hand_over: mountHandOver,
    today: mountToday,
    observation: mountObservation,
  });

  async function switchSurvey() {
    frame.close();
    hand.close();
    await notebook.close();
    rememberSurvey('');
    await choose('');
  }

  async function leaveSurvey() {
    const refused = await notebook.whyStay();
    if (refused) return refused;
    frame.close();
    hand.close();
    await notebook.leave();
    rememberSurvey('');
    await choose('');
    return '';
  }

  frame.open({
    notebook,
    position,
    hand,
    questions,
    summaries,
    theme,
    shell,
    storage: navigator.storage,
    clock,
    vibrate: (milliseconds) => void navigator.vibrate?.(milliseconds),
    go: frame.go,
    switchSurvey: () => void switchSurvey(),
    leaveSurvey,
  });
  frame.go(hand.values().site ? 'reading' : 'place');
  notebook.handover.start();
}

/** The survey stays in the address, so that a reload opens the same one. @param {string} survey */
function rememberSurvey(survey) {
  history.replaceState(null, '', survey ? `#survey=${survey}` : location.pathname);
}

/** @param {string} code of a joining link */
async function choose(code) {
  const joined = await listNotebooks(deps);
  mountJoin(root, {
    code,
    joined,
    look: (typed) => lookCode(deps, typed),
    join: (who, progress) => join(deps, who, progress),
    open: (survey) => void open(survey),
    done: (notebook) => void show(notebook).catch(fail),
  });
}

/** @param {string} survey */
async function open(survey) {
  try {
    await show(await openNotebook(deps, survey));
  } catch (error) {
    fail(error);
  }
}

/** @param {unknown} error */
function fail(error) {
  fill(
    root,
    el('main', {class: 'join'}, el('h1', {}, 'The notebook did not open'), el('p', {class: 'problem', role: 'alert'}, inWords(error)), el('p', {}, 'What was saved is still on this phone.'), el('button', {type: 'button', class: 'save', onclick: () => location.reload()}, 'Open it again')),
  );
}

async function begin() {
  const asked = new URLSearchParams(location.hash.slice(1));
  const code = asked.get('join');
  if (code) return choose(code);
  const joined = await listNotebooks(deps);
  const last = joined.find(({survey}) => survey === asked.get('survey')) ?? (joined.length === 1 ? joined[0] : null);
  return last ? open(last.survey) : choose('');
}

addEventListener('hashchange', () => new URLSearchParams(location.hash.slice(1)).has('join') && location.reload());
begin().catch(fail);
