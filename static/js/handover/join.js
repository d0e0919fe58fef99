/** Joining a survey: a code in, a device id and a token kept, the whole survey received. */

import {newDevice} from '../ledger/names.js';
import {checkSecure} from '../store/deps.js';
import {noteJoined} from '../store/joined.js';
import {changeInfo, keepInfo, load} from '../store/load.js';
import {notebookConnection} from '../store/open.js';
import {Problem} from '../store/problem.js';
import {sayAgain} from '../store/renew.js';
import {StoreApi, ask, problemIn} from './api.js';
import {NoConnection} from './failures.js';
import {hashesAtBase} from './pull.js';

/** @typedef {import('../store/deps.js').Deps} Deps */
/** @typedef {{survey: {id: string, name: string}, crew: {record: string, name: string}[]}} Looked */
/** @typedef {{code: string, crew?: string, name?: string}} Joining who joins: a crew record, or a new name */

/**
 * What a joining code opens: the survey, and who is in its crew. Spends nothing.
 * @param {Deps} deps
 * @param {string} code
 * @returns {Promise<Looked>} rejects with a Problem
 */
export async function lookCode(deps, code) {
  const body = await joiningAnswer(deps, 'joining/look', {code});
  if (typeof body.survey?.id !== 'string' || !Array.isArray(body.crew)) throw noConnection('something other than the store answered');
  return {survey: body.survey, crew: body.crew};
}

/**
 * Join, or join again: after a revoked token, or where the notebook was found on two phones. The
 * phone keeps all it holds but takes a new device id, and says again under it what base lacks.
 * @param {Deps} deps
 * @param {Joining} joining
 * @returns {Promise<string>} the survey's id; its entries are still to be pulled
 */
export async function joinSurvey(deps, {code, crew, name}) {
  checkSecure(deps);
  const {survey} = await lookCode(deps, code);
  const connection = notebookConnection(deps, survey.id);
  try {
    // Opened before the code is used: where nothing can be kept, nobody joins.
    const held = await load(connection);
    const device = newDevice(deps.crypto);
    const body = await joiningAnswer(deps, 'joining', {code, device, ...(crew ? {crew} : {name}), app: deps.app});
    for (const key of ['token', 'crew', 'store', 'epoch']) {
      if (typeof body[key] !== 'string') throw noConnection('something other than the store answered');
    }
    const {token, store, epoch} = body;
    const info = {
      survey: survey.id, name: survey.name, crew: body.crew, device, store, epoch, token, isJoined: false, stopped: '',
    };
    if (held) await joinAgain(deps, connection, held, info);
    else await keepInfo(connection, info);
    return survey.id;
  } finally {
    await connection.close();
  }
}

/**
 * @param {Deps} deps
 * @param {import('../store/open.js').Connection} connection
 * @param {import('../store/load.js').Kept} held
 * @param {import('../store/load.js').Info} info
 */
async function joinAgain(deps, connection, held, info) {
  if (held.info.store !== info.store) {
    throw new Problem(
      'Not joined: this phone holds that survey from another store', '',
      'Hand over to the store it came from before it is joined here.',
    );
  }
  const api = new StoreApi(deps, () => info, new AbortController().signal);
  // What base took without the phone hearing of it must not be said a second time.
  const hasOldStore = held.info.epoch === info.epoch;
  const hashes = await hashesAtBase(api, hasOldStore ? held.cursor : 0, held.info.device).catch((error) => {
    throw error instanceof NoConnection ? noConnection(error.message) : error;
  });
  // The old epoch stays, so that the first hand-over sees the new one and compares anew.
  const kept = {...info, epoch: held.info.epoch, isJoined: held.info.isJoined};
  await sayAgain(connection, deps, {info: kept, isAtBase: (entry) => hashes.get(entry.n) === entry.sha256 || (hasOldStore && entry.seq !== null)});
}

/**
 * The whole survey is here: from now on the phone counts as joined.
 * @param {Deps} deps
 * @param {import('../store/open.js').Connection} connection
 * @param {{survey: string, name: string}} joined
 * @returns {Promise<import('../store/load.js').Info>}
 */
export async function markJoined(deps, connection, joined) {
  const info = await changeInfo(connection, {isJoined: true, name: joined.name});
  await noteJoined(deps, joined);
  return info;
}

/**
 * @param {Deps} deps
 * @param {string} path
 * @param {Record<string, unknown>} json
 */
async function joiningAnswer(deps, path, json) {
  const answer = await ask(deps, 'POST', path, {json}).catch((error) => {
    throw error instanceof NoConnection ? noConnection(error.message) : error;
  });
  if (answer.status >= 400) throw problemIn(answer);
  return answer.body;
}

/** @param {string} detail */
export function noConnection(detail) {
  return new Problem('No connection to base', detail, 'Try again where there is a connection.');
}
