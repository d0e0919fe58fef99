/** Paper, sunlit or dark: as the system asks, or as chosen here and kept in the notebook. */

const KEPT = 'theme';

/** @typedef {'system' | 'paper' | 'sunlit' | 'dark'} ThemeName */
/** @typedef {Awaited<ReturnType<typeof openTheme>>} Theme */

/** @type {[ThemeName, string][]} */
export const THEMES = [['system', 'as the phone'], ['paper', 'paper'], ['sunlit', 'sunlit'], ['dark', 'dark']];

/**
 * @param {import('./parts.js').Notebook} notebook
 * @param {HTMLElement} root the page's html element
 */
export async function openTheme(notebook, root) {
  let name = /** @type {ThemeName} */ ((await notebook.draft.get(KEPT)) ?? 'system');
  show(root, name);
  return {
    get: () => name,
    /** @param {ThemeName} chosen */
    async choose(chosen) {
      name = chosen;
      show(root, name);
      await notebook.draft.put(KEPT, name);
    },
  };
}

/** @param {HTMLElement} root @param {ThemeName} name */
function show(root, name) {
  if (name === 'system') delete root.dataset.theme;
  else root.dataset.theme = name;
}
