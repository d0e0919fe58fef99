/** What every screen of an open survey is handed. */

/** @typedef {import('../handover/notebook.js').OpenNotebook} Notebook */

/**
 * @typedef {object} Parts
 * @property {Notebook} notebook
 * @property {import('../sensors/position.js').Position} position
 * @property {import('./sheet_in_hand.js').SheetInHand} hand
 * @property {import('./questions_here.js').Questions} questions
 * @property {import('./summaries.js').Summaries} summaries
 * @property {import('./theme.js').Theme} theme
 * @property {import('./shell_update.js').ShellUpdate} shell
 * @property {StorageManager | undefined} storage
 * @property {() => number} clock milliseconds
 * @property {(milliseconds: number) => void} vibrate
 * @property {(place: PlaceName, detail?: string) => void} go
 * @property {() => void} switchSurvey
 * @property {() => Promise<string>} leaveSurvey why the survey is not taken off the phone; '' once it is gone
 */

/** @typedef {'place' | 'reading' | 'finding' | 'hand_over' | 'today' | 'observation'} PlaceName */

/**
 * A screen on the page.
 * @typedef {object} Screen
 * @property {() => void} remove takes down what the screen set up; the frame empties the page
 * @property {() => void} [update] the notebook changed
 */

/**
 * @typedef {object} Room where a screen is put
 * @property {HTMLElement} main scrolls
 * @property {HTMLElement} dock stays at the thumb, above the places
 * @property {AbortSignal} signal aborted when the screen is left
 * @property {string} detail which record, where a screen shows one
 */

/** @typedef {(room: Room, parts: Parts) => Screen} Mount */

/**
 * Names of the records that a reference may name.
 * @param {Notebook} notebook
 * @returns {(kind: string) => import('./choice.js').Option[]}
 */
export function referable(notebook) {
  return (kind) => {
    const rows = kind === 'site' ? notebook.sites().filter((site) => !site.crossed_out) : kind === 'crew' ? notebook.crew() : [];
    return rows.map((row) => ({value: row.record, label: row.name ?? row.record})).sort((a, b) => a.label.localeCompare(b.label));
  };
}
