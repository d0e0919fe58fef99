/** The photos of a saved observation, from their thumbnails on this phone. */

import {el} from './element.js';

/**
 * @param {import('../handover/notebook.js').OpenNotebook} notebook
 * @param {string} record
 * @param {AbortSignal} signal
 */
export function photoGallery(notebook, record, signal) {
  const element = el('section', {class: 'photos', 'aria-label': 'Photos'});
  void fillGallery();
  return element;

  async function fillGallery() {
    const rows = (await notebook.photos(record)).filter((photo) => !photo.crossed_out);
    const figures = await Promise.all(rows.map((row, i) => figure(row, i)));
    if (!signal.aborted) element.append(...figures);
  }

  /** @param {any} row @param {number} i */
  async function figure(row, i) {
    const url = await row.thumbnailUrl?.();
    if (!url) return el('p', {}, `Photo ${i + 1} is not on this phone.`);
    signal.addEventListener('abort', () => URL.revokeObjectURL(url));
    return el('figure', {}, el('img', {src: url, alt: `Photo ${i + 1} of this observation`}));
  }
}
