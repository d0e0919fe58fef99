/** The other way out: everything in a file; and taking a survey off the phone once nothing is here only. */

import {el, say} from './element.js';
import {count, size} from './figures.js';

/** @typedef {import('./parts.js').Parts} Parts */

/**
 * @param {Parts} parts
 * @returns {HTMLElement}
 */
export function wayOut({notebook, leaveSurvey}) {
  const saved = el('p', {class: 'help', role: 'status'});
  const left = el('p', {class: 'problem', role: 'alert', hidden: true});
  const save = el('button', {type: 'button', class: 'wide', onclick: () => void saveFile()}, 'Save everything to a file');
  const leave = el('button', {type: 'button', class: 'wide', onclick: () => void leaving()}, 'Leave this survey');

  async function saveFile() {
    save.disabled = true;
    try {
      const {blob, name, entries, photos} = await notebook.toFile();
      const told = `${count(entries, 'entry', 'entries')}${photos ? ` and ${count(photos, 'photo')}` : ''}, ${size(blob.size)}`;
      if (await handOut(new File([blob], name, {type: blob.type}))) {
        await notebook.noteFiled();
        say(saved, `Saved to ${name}: ${told}. Give it to the lead, who imports it.`);
      } else {
        say(saved, 'Not saved: the file was not taken.');
      }
    } catch (error) {
      say(saved, `Not saved: ${error instanceof Error ? error.message : error}`);
    } finally {
      save.disabled = false;
    }
  }

  async function leaving() {
    const refused = await leaveSurvey();
    say(left, refused);
    left.hidden = !refused;
  }

  return el(
    'section',
    {},
    el('h2', {}, 'Without a connection'),
    el('p', {class: 'help'}, 'Everything that is here, as a file for the lead to import. It also works on a phone that was revoked.'),
    save,
    saved,
    el('details', {}, el('summary', {}, 'Leave this survey'),
      el('p', {class: 'help'}, 'Takes it off this phone, once nothing of it is only here.'), leave, left),
  );
}

/**
 * The share sheet where there is one that takes files, else a download.
 * @param {File} file
 * @returns {Promise<boolean>} whether it was taken
 */
async function handOut(file) {
  if (navigator.canShare?.({files: [file]})) {
    try {
      await navigator.share({files: [file]});
      return true;
    } catch (error) {
      if (error instanceof DOMException && error.name === 'AbortError') return false;
    }
  }
  const url = URL.createObjectURL(file);
  const link = el('a', {href: url, download: file.name});
  link.click();
  setTimeout(() => URL.revokeObjectURL(url), 60_000);
  return true;
}
