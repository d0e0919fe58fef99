/**
 * The form as the sheet implies it: each measure is a block of its own with the plain fields that
 * follow it in its group; plain fields before a group's first measure make a block too.
 */

/** @typedef {import('./declared.js').FieldDeclaration} FieldDeclaration */
/** @typedef {import('./declared.js').SheetDeclaration} SheetDeclaration */

/**
 * @typedef {object} Block
 * @property {string} key the name of its first field
 * @property {string} label
 * @property {FieldDeclaration | null} measure
 * @property {FieldDeclaration[]} plain its other fields
 * @property {FieldDeclaration[]} companions choices without which the measure says nothing (north, up or down)
 */

/**
 * The fields that the form asks for.
 * @param {SheetDeclaration} sheet
 * @param {string[]} switchedOn names of the optional fields that the survey uses
 * @returns {FieldDeclaration[]}
 */
export function askedFields(sheet, switchedOn) {
  return sheet.fields.filter(
    (field) =>
      field.asked && !field.retired && !field.derived_from.length && (!field.optional || switchedOn.includes(field.name)),
  );
}

/**
 * @param {SheetDeclaration} sheet
 * @param {string[]} switchedOn
 * @returns {Block[]}
 */
export function blocks(sheet, switchedOn) {
  const asked = askedFields(sheet, switchedOn);
  const keys = [...new Set([...Object.keys(sheet.groups), ...asked.map((field) => field.group)])];
  return keys.flatMap((group) => groupBlocks(sheet, group, asked.filter((field) => field.group === group)));
}

/**
 * @param {SheetDeclaration} sheet
 * @param {string} group
 * @param {FieldDeclaration[]} fields
 * @returns {Block[]}
 */
function groupBlocks(sheet, group, fields) {
  /** @type {Block[]} */
  const made = [];
  for (const field of fields) {
    const last = made.at(-1);
    if (field.measure) {
      const companions = companionsOf(sheet, field);
      made.push({key: field.name, label: field.label, measure: field, plain: [], companions});
    } else if (last) {
      last.plain.push(field);
    } else {
      made.push({key: field.name, label: sheet.groups[group] ?? group, measure: null, plain: [field], companions: []});
    }
  }
  for (const block of made) {
    const beside = block.companions.map((field) => field.name);
    block.plain = block.plain.filter((field) => !beside.includes(field.name));
    const [only, ...others] = block.plain;
    if (!block.measure && only && !others.length) block.label = only.label;
  }
  return made;
}

/**
 * The choices that the value derived from `field` hangs on.
 * @param {SheetDeclaration} sheet
 * @param {FieldDeclaration} field
 * @returns {FieldDeclaration[]}
 */
export function companionsOf(sheet, field) {
  const derived = derivedFrom(sheet, field);
  if (!derived) return [];
  return sheet.fields.filter((other) => other.asked && other.type === 'choice' && derived.derived_from.includes(other.name));
}

/**
 * The field that is derived from what `field` reads, if any.
 * @param {SheetDeclaration} sheet
 * @param {FieldDeclaration} field
 * @returns {FieldDeclaration | undefined}
 */
export function derivedFrom(sheet, field) {
  return sheet.fields.find((other) => other.derived_from[0] === field.name);
}
