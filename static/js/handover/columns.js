/** A batch as columns: what differs between entries apart from what repeats; the mirror of fieldlog/handover/columns.py. */

export const COLUMNS_TYPE = 'application/vnd.ergbook.columns';

const HOLE = '\0';
const TOKEN = /"(?:[^"\\]|\\.)*"|[-+.\deE]+|true|false|null|[{}[\]:,]/y;

/**
 * @param {object} head of the batch, without its entries
 * @param {string[]} texts of the entries
 * @returns {string | null} null where a text is not written as this app writes them: send them plainly then
 */
export function toColumns(head, texts) {
  /** @type {Map<string, string[][]>} shape -> the values of each entry of that shape */
  const shapes = new Map();
  const rows = [];
  for (const text of texts) {
    const found = shapeOf(text);
    if (!found) return null;
    if (!shapes.has(found.shape)) shapes.set(found.shape, []);
    shapes.get(found.shape)?.push(found.values);
    rows.push([...shapes.keys()].indexOf(found.shape));
  }
  const lines = [JSON.stringify({...head, shapes: [...shapes.keys()], rows})];
  for (const members of shapes.values()) {
    for (let hole = 0; hole < members[0].length; hole += 1) lines.push(...members.map((values) => values[hole]));
  }
  return lines.join('\n');
}

/**
 * A text with a hole for every value, and the values.
 * @param {string} text
 * @returns {{shape: string, values: string[]} | null}
 */
function shapeOf(text) {
  /** @type {string[]} */
  const tokens = [];
  let length = 0;
  TOKEN.lastIndex = 0;
  for (let found = TOKEN.exec(text); found; found = TOKEN.exec(text)) {
    tokens.push(found[0]);
    length += found[0].length;
  }
  if (length !== text.length || text.includes(HOLE) || text.includes('\n')) return null;
  const values = [];
  let shape = '';
  for (const [i, token] of tokens.entries()) {
    const isKept = '{}[]:,'.includes(token) || tokens[i + 1] === ':';
    if (!isKept) values.push(token);
    shape += isKept ? token : HOLE;
  }
  return {shape, values};
}
