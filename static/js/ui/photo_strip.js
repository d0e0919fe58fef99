/** Photos of the reading in hand: taken, shown small, and left out again. */

import {readPhoto} from '../sensors/camera.js';
import {el, fill, say} from './element.js';

/**
 * @param {object} deps
 * @param {() => import('../sensors/camera.js').Taken[]} deps.photos
 * @param {(photos: import('../sensors/camera.js').Taken[]) => Promise<void>} deps.change
 * @param {() => {longEdgePx?: number | null, isOriginal?: boolean | null}} deps.wanted how the survey wants photos
 * @param {AbortSignal} deps.signal
 */
export function photoStrip({photos, change, wanted, signal}) {
  const thumbnails = el('div', {class: 'thumbnails'});
  const message = el('p', {class: 'problem', role: 'alert', hidden: true});
  const input = el('input', {
    type: 'file',
    accept: 'image/*',
    capture: 'environment',
    'aria-label': 'Add a photo',
    onchange: () => void add(),
  });
  const label = el('label', {class: 'button'}, 'Add a photo', input);
  /** @type {Map<unknown, string>} thumbnail -> blob URL */
  const urls = new Map();
  signal.addEventListener('abort', () => urls.forEach((url) => URL.revokeObjectURL(url)));

  async function add() {
    const file = input.files?.[0];
    input.value = '';
    if (!file) return;
    message.hidden = true;
    label.setAttribute('aria-busy', 'true');
    try {
      await change([...photos(), await readPhoto(file, wanted())]);
    } catch (error) {
      say(message, error instanceof Error ? error.message : String(error));
      message.hidden = false;
    } finally {
      label.removeAttribute('aria-busy');
    }
  }

  /** @param {ArrayBuffer} bytes */
  function urlOf(bytes) {
    const known = urls.get(bytes) ?? URL.createObjectURL(new Blob([bytes], {type: 'image/jpeg'}));
    urls.set(bytes, known);
    return known;
  }

  return {
    element: el('section', {class: 'photos', 'aria-label': 'Photos'}, label, message, thumbnails),
    show() {
      const taken = photos();
      fill(
        thumbnails,
        taken.map((photo, i) =>
          el(
            'figure',
            {},
            el('img', {src: urlOf(photo.thumbnail), alt: `Photo ${i + 1} of this reading`}),
            el('button', {type: 'button', onclick: () => void change(taken.filter((other) => other !== photo))}, 'Leave out'),
          ),
        ),
      );
    },
  };
}
