/** What the checks ask about the readings of a site, less what the reader has kept as it is. */

import {questions} from '../sheet/check.js';
import {thresholdsOf} from '../sheet/question.js';

/** @typedef {import('./parts.js').Notebook} Notebook */
/** @typedef {import('../sheet/question.js').Question} Question */
/** @typedef {Awaited<ReturnType<typeof openQuestions>>} Questions */

const KEPT = 'questions answered';

/** @param {Notebook} notebook */
export async function openQuestions(notebook) {
  /** @type {Set<string>} "record code" of each question that was answered with "keep" */
  const kept = new Set((await notebook.draft.get(KEPT)) ?? []);
  /** @type {Map<string, Map<string, Question[]>>} site -> record -> questions; emptied at every change */
  const known = new Map();
  notebook.onChange(() => known.clear());

  return {
    /**
     * @param {string | null | undefined} site
     * @returns {Map<string, Question[]>} by record
     */
    at(site) {
      if (!site) return new Map();
      const found = known.get(site) ?? ask(notebook, site, kept);
      known.set(site, found);
      return found;
    },
    /** @param {Question} question */
    async keep({record, code}) {
      kept.add(`${record} ${code}`);
      known.clear();
      await notebook.draft.put(KEPT, [...kept]);
    },
  };
}

/**
 * @param {Notebook} notebook
 * @param {string} site
 * @param {Set<string>} kept
 */
function ask(notebook, site, kept) {
  /** @type {Map<string, Question[]>} */
  const found = new Map();
  const rows = /** @type {any[]} */ (notebook.observations({site}));
  const sites = /** @type {any[]} */ (notebook.sites());
  const survey = /** @type {any} */ (notebook.survey() ?? {});
  for (const question of questions(rows, {sites, thresholds: thresholdsOf(survey), timeZone: survey.time_zone ?? 'UTC'})) {
    if (kept.has(`${question.record} ${question.code}`)) continue;
    found.set(question.record, [...(found.get(question.record) ?? []), question]);
  }
  return found;
}
