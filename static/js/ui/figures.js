/** How numbers, times and places read on the phone: with their unit, and no more digits than they bear. */

const POINTS = ['N', 'NE', 'E', 'SE', 'S', 'SW', 'W', 'NW'];

/**
 * A bearing in three digits, as it is said: "007°", "214.5°".
 * @param {number} deg
 * @param {number} [decimals]
 */
export function bearing(deg, decimals = Number.isInteger(deg) ? 0 : 1) {
  const turned = ((Number(deg.toFixed(decimals)) % 360) + 360) % 360;
  const [whole, rest] = turned.toFixed(decimals).split('.');
  return `${whole.padStart(3, '0')}${rest ? `.${rest}` : ''}°`;
}

/** @param {number} deg */
export function compassPoint(deg) {
  return POINTS[Math.round((((deg % 360) + 360) % 360) / 45) % 8];
}

/**
 * "8 m", "340 m", "1.2 km", "38 km".
 * @param {number} metres
 */
export function distance(metres) {
  if (metres < 995) return `${metres < 100 ? Math.round(metres) : Math.round(metres / 10) * 10} m`;
  return metres < 9950 ? `${(metres / 1000).toFixed(1)} km` : `${Math.round(metres / 1000)} km`;
}

/**
 * Metres of accuracy or spread: one decimal below ten.
 * @param {number} metres
 */
export function metres(metres) {
  return `${metres < 9.95 ? metres.toFixed(1) : Math.round(metres)} m`;
}

/**
 * How long ago, in one unit: "8 s", "5 min", "3 h", "2 days".
 * @param {number} millis
 */
export function span(millis) {
  const seconds = Math.max(0, Math.round(millis / 1000));
  if (seconds < 100) return `${seconds} s`;
  if (seconds < 5400) return `${Math.round(seconds / 60)} min`;
  if (seconds < 129600) return `${Math.round(seconds / 3600)} h`;
  return `${Math.round(seconds / 86400)} days`;
}

/**
 * Clock time in the survey's zone: "14:05".
 * @param {string | number} when
 * @param {string | null | undefined} zone
 */
export function clockTime(when, zone) {
  return parts(when, zone, {hour: '2-digit', minute: '2-digit', hourCycle: 'h23'}, 'en-GB');
}

/**
 * The survey's day: "2026-03-04".
 * @param {string | number} when
 * @param {string | null | undefined} zone
 */
export function day(when, zone) {
  return parts(when, zone, {year: 'numeric', month: '2-digit', day: '2-digit'}, 'en-CA');
}

/** @type {Map<string, Intl.DateTimeFormat>} */
const formats = new Map();

/**
 * @param {string | number} when
 * @param {string | null | undefined} zone
 * @param {Intl.DateTimeFormatOptions} shape
 * @param {string} language
 */
function parts(when, zone, shape, language) {
  const key = `${language} ${zone ?? ''}`;
  let format = formats.get(key);
  if (!format) {
    try {
      format = new Intl.DateTimeFormat(language, {...shape, timeZone: zone || 'UTC'});
    } catch {
      format = new Intl.DateTimeFormat(language, {...shape, timeZone: 'UTC'}); // a zone this phone does not know
    }
    formats.set(key, format);
  }
  return format.format(new Date(when));
}

/**
 * "24.512340 N, 54.123450 E": six decimals are about a decimetre.
 * @param {number} latDeg
 * @param {number} lonDeg
 */
export function latLon(latDeg, lonDeg) {
  const lat = `${Math.abs(latDeg).toFixed(6)}° ${latDeg < 0 ? 'S' : 'N'}`;
  return `${lat}, ${Math.abs(lonDeg).toFixed(6)}° ${lonDeg < 0 ? 'W' : 'E'}`;
}

/**
 * "1 reading", "3 readings".
 * @param {number} n
 * @param {string} one
 * @param {string} [many]
 */
export function count(n, one, many = `${one}s`) {
  return `${n} ${n === 1 ? one : many}`;
}

/**
 * "1.4 MB", "820 kB".
 * @param {number} bytes
 */
export function size(bytes) {
  if (bytes < 1e6) return `${Math.round(bytes / 1e3)} kB`;
  return bytes < 1e9 ? `${(bytes / 1e6).toFixed(1)} MB` : `${(bytes / 1e9).toFixed(1)} GB`;
}
