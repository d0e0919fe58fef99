/** What a person reads when something does not work: what, why, and what to do next. */

export class Problem extends Error {
  /**
   * @param {string} title what does not work, a plain clause
   * @param {string} [detail] why
   * @param {string} [mend] what to do next
   * @param {number} [status] of the HTTP answer, where there was one
   */
  constructor(title, detail = '', mend = '', status = 0) {
    super(detail ? `${title}: ${detail}` : title);
    this.name = 'Problem';
    this.title = title;
    this.detail = detail;
    this.mend = mend;
    this.status = status;
  }
}

/**
 * The problem that an error of the phone's own store means.
 * @param {unknown} error
 * @returns {Problem}
 */
export function storeProblem(error) {
  if (error instanceof Problem) return error;
  const {name, message} = error instanceof Error || error instanceof DOMException ? error : {name: '', message: String(error)};
  if (name === 'QuotaExceededError') {
    return new Problem('Not saved: the phone is full', message, 'Free some space on the phone, then save again. The form is kept.');
  }
  if (name === 'VersionError') {
    return new Problem('A newer Ergbook is at work here', message, 'Close all its pages and open it again.');
  }
  return new Problem('Not saved: the phone\'s store failed', `${name} ${message}`.trim(), 'Save again; if that fails, reload the page. The form is kept.');
}
