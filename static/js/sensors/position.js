/**
 * Where the phone stands: fixes watched and averaged while it stands still.
 * The sensor runs only between start() and stop(), and rests while the page is not looked at.
 */

import {average, ofThisStand} from './average.js';

/** @typedef {import('./average.js').AveragedFix} AveragedFix */
/** @typedef {'off' | 'waiting' | 'fixed' | 'denied' | 'unavailable'} PositionStatus */
/** @typedef {{status: PositionStatus, fix: AveragedFix | null}} PositionState `fix` is the last one had */

/**
 * @typedef {object} Position
 * @property {() => PositionState} state
 * @property {() => number | null} age milliseconds since the newest fix, null without one
 * @property {() => void} start
 * @property {() => void} stop
 * @property {(listener: () => void, signal?: AbortSignal) => void} watch
 */

const OPTIONS = {enableHighAccuracy: true, maximumAge: 0, timeout: 60_000};
const DENIED = 1;

/**
 * @param {{geolocation: Geolocation | undefined, clock: () => number, page: Document}} deps
 * @returns {Position}
 */
export function createPosition({geolocation, clock, page}) {
  /** @type {PositionState} */
  let state = {status: 'off', fix: null};
  /** @type {import('./average.js').Fix[]} */
  let stand = [];
  /** @type {number | null} */
  let watchId = null;
  let wanted = false;
  /** @type {Set<() => void>} */
  const listeners = new Set();

  /** @param {Partial<PositionState>} change */
  function become(change) {
    state = {...state, ...change};
    for (const listener of [...listeners]) listener();
  }

  /** @param {GeolocationPosition} position */
  function onFix({coords}) {
    stand = ofThisStand(stand, {
      lat_deg: coords.latitude,
      lon_deg: coords.longitude,
      accuracy_m: coords.accuracy,
      altitude_m: coords.altitude,
      at: clock(),
    });
    become({status: 'fixed', fix: average(stand)});
  }

  /** @param {GeolocationPositionError} error */
  function onError({code}) {
    become({status: code === DENIED ? 'denied' : 'unavailable'});
  }

  function follow() {
    const runs = wanted && page.visibilityState === 'visible';
    if (runs && watchId === null) {
      if (!geolocation) return become({status: 'unavailable'});
      become({status: 'waiting'});
      watchId = geolocation.watchPosition(onFix, onError, OPTIONS);
    } else if (!runs && watchId !== null) {
      geolocation?.clearWatch(watchId);
      watchId = null;
      stand = []; // the phone may be carried on while nobody looks
      become({status: 'off'});
    }
  }

  page.addEventListener('visibilitychange', follow);
  return {
    state: () => state,
    age: () => (state.fix ? clock() - state.fix.at : null),
    start() {
      wanted = true;
      follow();
    },
    stop() {
      wanted = false;
      follow();
    },
    watch(listener, signal) {
      listeners.add(listener);
      signal?.addEventListener('abort', () => listeners.delete(listener), {once: true});
    },
  };
}
