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
