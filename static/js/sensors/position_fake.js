/** A geolocation for tests: gives the fixes it is handed, to whoever watches. */

/**
 * @typedef {object} FakeGeolocation
 * @property {Geolocation} geolocation
 * @property {(latDeg: number, lonDeg: number, accuracyM: number, altitudeM?: number | null) => void} give
 * @property {(code: number) => void} fail 1 denied, 2 unavailable, 3 timed out
 * @property {() => number} watchers how many watch now
 */

/** @returns {FakeGeolocation} */
export function fakeGeolocation() {
  /** @type {Map<number, {success: PositionCallback, error: PositionErrorCallback | null | undefined}>} */
  const watchers = new Map();
  let next = 1;
  const geolocation = {
    /** @param {PositionCallback} success @param {PositionErrorCallback | null} [error] */
    watchPosition(success, error) {
      watchers.set(next, {success, error});
      return next++;
    },
    /** @param {number} id */
    clearWatch: (id) => void watchers.delete(id),
    getCurrentPosition: () => undefined,
  };
  return {
    geolocation: /** @type {Geolocation} */ (geolocation),
    give(latitude, longitude, accuracy, altitude = null) {
      const coords = {latitude, longitude, accuracy, altitude, altitudeAccuracy: null, heading: null, speed: null};
      const position = /** @type {GeolocationPosition} */ ({coords, timestamp: 0});
      for (const {success} of [...watchers.values()]) success(position);
    },
    fail(code) {
      const error = /** @type {GeolocationPositionError} */ ({code, message: ''});
      for (const watcher of [...watchers.values()]) watcher.error?.(error);
    },
    watchers: () => watchers.size,
  };
}
