/** The desk's pages work without this; it keeps the chosen light. */

const KEY = 'ergbook-light';

const select = /** @type {HTMLSelectElement | null} */ (document.getElementById('theme'));

/** @param {string} light */
function show(light) {
  if (light) document.documentElement.dataset.theme = light;
  else delete document.documentElement.dataset.theme;
}

const kept = localStorage.getItem(KEY) ?? '';
show(kept);
if (select) {
  select.value = kept;
  select.addEventListener('change', () => {
    localStorage.setItem(KEY, select.value);
    show(select.value);
  });
}
