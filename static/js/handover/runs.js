/** Rows that base says once with how many follow on, each by itself again. */

const MOST = 500;

/**
 * @template {Record<string, any>} T
 * @param {T[]} rows with `count`: so many in a row, n and seq going on by one
 * @returns {T[]}
 */
export function singly(rows) {
  return rows.flatMap((row) => {
    if (!Number.isInteger(row?.count) || row.count < 2) return [row];
    const {count, ...first} = row;
    return Array.from({length: Math.min(count, MOST)}, (_, i) => /** @type {T} */ (/** @type {unknown} */ (
      {...first, n: first.n + i, ...(first.seq === undefined ? {} : {seq: first.seq + i})}
    )));
  });
}
