/** Which readings may be put together: the samples of one measure; the mirror of fieldlog/sheet/sample.py. */

/** @typedef {Readonly<Record<string, unknown>>} Row an observation with the sheet's column names */

/**
 * Readings of one order, face and dune type (null where that was not said). `angles` are degrees,
 * `bedforms` name the dune of each (null where none was said), `records` the observation of each;
 * all three in the order of the rows.
 * @typedef {{order: string | null, face: string | null, dune_type: string | null, angles: number[],
 *   bedforms: (string | null)[], records: string[]}} Sample
 */

/**
 * The samples among `rows` (of one site), the largest first; the first is the site's default.
 * Samples of one size keep the order in which their first readings stand in `rows`.
 * @param {Iterable<Row>} rows
 * @param {string} measure a derived bearing, such as "slip_face_deg" or "crest_deg"
 * @param {Iterable<[string, string]>} [same] pairs of dunes that a lead has called one
 * @returns {Sample[]}
 */
export function samples(rows, measure, same = []) {
  const called = oneName(same);
  /** @type {Map<string, Sample>} */
  const groups = new Map();
  for (const row of rows) {
    const angle = row[measure];
    if (!counts(row) || typeof angle !== 'number') continue;
    const [order, face, duneType] = [text(row.bedform_order), text(row.face), text(row.dune_type)];
    const key = JSON.stringify([order, face, duneType]);
    const sample = groups.get(key) ?? { order, face, dune_type: duneType, angles: [], bedforms: [], records: [] };
    groups.set(key, sample);
    sample.angles.push(angle);
    const name = dune(row);
    sample.bedforms.push(name === null ? null : called.get(name) ?? name);
    sample.records.push(String(row.record));
  }
  return [...groups.values()].sort((a, b) => b.angles.length - a.angles.length);
}

/**
 * Dune -> the one name under which it and all dunes that are the same are counted.
 * @param {Iterable<[string, string]>} same
 * @returns {Map<string, string>}
 */
export function oneName(same) {
  /** @type {Map<string, string>} */
  const called = new Map();
  for (const pair of same) {
    const [kept, dropped] = pair.map((name) => called.get(name) ?? name).sort();
    for (const [name, to] of called) if (to === dropped) called.set(name, kept);
    for (const name of [...pair, dropped]) called.set(name, kept);
  }
  return called;
}

/**
 * Whether an observation stands and adds to n: not crossed out and no check reading.
 * @param {Row} row
 * @returns {boolean}
 */
export function counts(row) {
  return !row.crossed_out && !row.check_of;
}

/**
 * The dune of an observation, named by the device that numbered it and its number: two phones
 * number their dunes without seeing each other. Valid within one site.
 * @param {Row} row
 * @returns {string | null}
 */
export function dune(row) {
  return typeof row.bedform === 'number' ? `${device(row)}/${row.bedform}` : null;
}

/**
 * The device that made an observation: its record's name without the number.
 * @param {Row} row
 * @returns {string}
 */
export function device(row) {
  const record = String(row.record);
  return record.slice(0, Math.max(0, record.lastIndexOf('-')));
}

/** @param {unknown} value */
function text(value) {
  return typeof value === 'string' ? value : null;
}
