/** Photos as the notebook keeps them: turned upright, no larger than needed, JPEG, with a thumbnail. */

const LONGEST_PX = 1600; // where the survey says nothing
const KEPT_AS_IT_IS = ['image/jpeg', 'image/png', 'image/webp'];
const THUMBNAIL_PX = 240;

/**
 * @typedef {object} Taken
 * @property {ArrayBuffer} bytes
 * @property {number} width pixels
 * @property {number} height pixels
 * @property {ArrayBuffer} thumbnail
 */

/**
 * @param {Blob} file what the camera or the gallery gave
 * @param {{longEdgePx?: number | null, isOriginal?: boolean | null}} [wanted] as the survey sets it
 * @returns {Promise<Taken>} throws an Error in words where the file is no picture
 */
export async function readPhoto(file, {longEdgePx, isOriginal} = {}) {
  const picture = await createImageBitmap(file, {imageOrientation: 'from-image'}).catch(() => null);
  if (!picture) throw new Error('This file is not a picture that the phone can read. Take the photo again.');
  try {
    const large = isOriginal && KEPT_AS_IT_IS.includes(file.type)
      ? {bytes: await file.arrayBuffer(), width: picture.width, height: picture.height}
      : await asJpeg(picture, longEdgePx ?? LONGEST_PX, 0.85);
    const small = await asJpeg(picture, THUMBNAIL_PX, 0.7);
    return {bytes: large.bytes, width: large.width, height: large.height, thumbnail: small.bytes};
  } finally {
    picture.close();
  }
}

/**
 * @param {ImageBitmap} picture
 * @param {number} longest pixels
 * @param {number} quality 0 to 1
 */
async function asJpeg(picture, longest, quality) {
  const scale = Math.min(1, longest / Math.max(picture.width, picture.height));
  const canvas = document.createElement('canvas');
  canvas.width = Math.max(1, Math.round(picture.width * scale));
  canvas.height = Math.max(1, Math.round(picture.height * scale));
  canvas.getContext('2d')?.drawImage(picture, 0, 0, canvas.width, canvas.height);
  /** @type {Blob | null} */
  const blob = await new Promise((resolve) => canvas.toBlob(resolve, 'image/jpeg', quality));
  if (!blob) throw new Error('The photo could not be made smaller. Free some memory and take it again.');
  return {bytes: await blob.arrayBuffer(), width: canvas.width, height: canvas.height};
}
