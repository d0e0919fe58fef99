/** Summaries as the screens want them: something at once, the whole when the worker has it. */

/** @typedef {import('../science/summary.js').Summary} Summary */
/** @typedef {import('../science/summary.js').Options} Options */
/** @typedef {ReturnType<typeof createSummaries>} Summaries */

const REMEMBERED = 12;

/** @param {ReturnType<typeof import('../science/summarise_apart.js').summariseApart>} apart */
export function createSummaries(apart) {
  /** @type {Map<string, Summary>} */
  const known = new Map();

  /** @param {string} key @param {Summary} summary */
  function remember(key, summary) {
    known.set(key, summary);
    const [oldest] = known.keys();
    if (known.size > REMEMBERED && oldest !== undefined) known.delete(oldest);
  }

  return {
    /**
     * @param {number[]} anglesDeg
     * @param {Options} options
     * @param {(summary: Summary) => void} draw called once or twice
     * @param {(error: Error) => void} failed
     */
    of(anglesDeg, options, draw, failed) {
      const key = JSON.stringify([anglesDeg, options]);
      const before = known.get(key);
      if (before) return draw(before);
      const {first, whole} = apart.summarise(anglesDeg, options);
      draw(first);
      if (first.outcome !== 'pending') return remember(key, first);
      whole.then((summary) => {
        remember(key, summary);
        draw(summary);
      }, failed);
    },
  };
}
