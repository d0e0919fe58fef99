/**
 * Names of devices, entries and records; the mirror of fieldlog/ledger/names.py.
 * A device is 74 random bits written as 15 characters, an entry is DEVICE-n with n = 1, 2, 3 ...
 * without a hole, a record carries the name of the entry that created it.
 */

/** 32 characters without i, l, o and u, which are misread or spell things. */
export const ALPHABET = '0123456789abcdefghjkmnpqrstvwxyz';

const NAME = new RegExp(`^([${ALPHABET.slice(0, 16)}][${ALPHABET}]{14})-([1-9][0-9]{0,14})$`);
const COUNTER_LIMIT = 2 ** 48;

/**
 * A new device id from the system's random source.
 * @param {Pick<Crypto, 'getRandomValues'>} random
 * @returns {string}
 */
export function newDevice(random) {
  const bytes = random.getRandomValues(new Uint8Array(15));
  // One byte a character wastes bits and needs no arithmetic on 74 of them; the first has four.
  return [...bytes].map((byte, index) => ALPHABET[index ? byte & 31 : byte & 15]).join('');
}

/**
 * @param {string} text
 * @returns {boolean}
 */
export function isDevice(text) {
  return NAME.test(`${text}-1`);
}

/**
 * The name of the entry that `device` numbered `n`.
 * @param {string} device
 * @param {number} n
 * @returns {string}
 */
export function entryName(device, n) {
  return `${device}-${n}`;
}

/**
 * Device and number of an entry name; RangeError where it is not one.
 * @param {string} name
 * @returns {{device: string, n: number}}
 */
export function splitName(name) {
  const match = NAME.exec(name);
  const n = match ? Number(match[2]) : 0;
  if (!match || n >= COUNTER_LIMIT) throw new RangeError(`not the name of an entry: ${name}`);
  return {device: match[1], n};
}

/**
 * The name as a UUID of version 8 (RFC 9562): device in the high, counter in the low free bits.
 * @param {string} name
 * @returns {string}
 */
export function nameToUuid(name) {
  const {device, n} = splitName(name);
  let bits = 0n;
  for (const character of device) bits = (bits << 5n) | BigInt(ALPHABET.indexOf(character));
  const free = (bits << 48n) | BigInt(n);
  const high = free >> 74n;
  const middle = (free >> 62n) & 0xfffn;
  const low = free & ((1n << 62n) - 1n);
  const whole = (high << 80n) | (8n << 76n) | (middle << 64n) | (2n << 62n) | low;
  const hex = whole.toString(16).padStart(32, '0');
  return [hex.slice(0, 8), hex.slice(8, 12), hex.slice(12, 16), hex.slice(16, 20), hex.slice(20)].join('-');
}
