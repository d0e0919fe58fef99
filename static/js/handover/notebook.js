/**
 * The notebook of a joined survey, as screens use it: find it, join it, open it; what an open one
 * can do stands in opened.js.
 */

import {checkSecure} from '../store/deps.js';
import {listJoined} from '../store/joined.js';
import {load, loadJoined} from '../store/load.js';
import {notebookConnection} from '../store/open.js';
import {Problem} from '../store/problem.js';
import {NewEpoch, NoConnection, Refused, Stopped, WrongStore} from './failures.js';
import {joinSurvey, noConnection} from './join.js';
import {Notebook} from './opened.js';

export {browserDeps} from '../store/deps.js';
export {Problem} from '../store/problem.js';
export {lookCode} from './join.js';

/** @typedef {import('../store/deps.js').Deps} Deps */
/** @typedef {import('../ledger/replica.js').Marks} Marks */
/** @typedef {import('./runner.js').HandoverState} HandoverState */
/** @typedef {import('./saying.js').PhotoTaken} PhotoTaken */
/** @typedef {import('./shelf.js').PhotoShown} PhotoShown */
/** @typedef {import('./opened.js').SurveyShown} SurveyShown */
/** @typedef {import('./opened.js').CrewShown} CrewShown */
/** @typedef {import('./opened.js').SiteShown} SiteShown */
/** @typedef {import('./opened.js').ObservationShown} ObservationShown */
/** @typedef {import('./opened.js').NotebookInfo} NotebookInfo */
/** @typedef {import('./opened.js').Notebook} OpenNotebook */

/**
 * The surveys joined on this phone, by name.
 * @param {Deps} deps
 * @returns {Promise<{survey: string, name: string}[]>}
 */
export function listNotebooks(deps) {
  return listJoined(deps);
}

/**
 * Join a survey and receive it whole. Joining again keeps what the phone holds.
 * @param {Deps} deps
 * @param {{code: string, crew?: string, name?: string}} joining `crew`: a crew record as `lookCode` lists them; else a new name
 * @param {(done: number, of: number) => void} [onProgress] entries received, of how many
 * @returns {Promise<Notebook>} rejects with a Problem
 */
export async function join(deps, joining, onProgress = () => {}) {
  // Asked first, while the tap that began the joining still counts; no answer is waited for.
  void deps.persist().catch(() => false);
  const survey = await joinSurvey(deps, joining);
  const connection = notebookConnection(deps, survey);
  const kept = await load(connection);
  if (!kept) throw new Problem('Not joined: the phone kept nothing', '', 'Free some space on the phone, then join again.');
  const notebook = new Notebook(deps, connection, kept);
  try {
    await notebook.receiveWhole(onProgress);
    return notebook;
  } catch (error) {
    await notebook.close();
    throw asProblem(error);
  }
}

/**
 * Open the notebook of a joined survey. Hand-over does not start by itself: `handover.start()`.
 * @param {Deps} deps
 * @param {string} survey id
 * @returns {Promise<Notebook>} rejects with a Problem
 */
export async function openNotebook(deps, survey) {
  checkSecure(deps);
  const connection = notebookConnection(deps, survey);
  try {
    return new Notebook(deps, connection, await loadJoined(connection));
  } catch (error) {
    await connection.close();
    throw error;
  }
}

/** @param {unknown} error */
function asProblem(error) {
  if (error instanceof NoConnection) return noConnection(error.message);
  if (error instanceof Refused || error instanceof Stopped) return error.problem;
  if (error instanceof WrongStore || error instanceof NewEpoch) return noConnection(error.message);
  return error;
}
