/** Joining a survey: the code, who one is, the cautions, and receiving the survey whole. */

import {CONSTANTS} from '../sheet/declared.js';
import {el, fill, say} from './element.js';

/** @typedef {import('../handover/notebook.js').OpenNotebook} OpenNotebook */
/** @typedef {Awaited<ReturnType<typeof import('../handover/notebook.js').lookCode>>} Looked */

/**
 * @param {HTMLElement} root
 * @param {object} deps
 * @param {string} deps.code from the joining link, '' where there was none
 * @param {{survey: string, name: string}[]} deps.joined surveys that this phone has joined
 * @param {(code: string) => Promise<Looked>} deps.look
 * @param {(who: {code: string, crew?: string, name?: string}, progress: (done: number, of: number) => void) => Promise<OpenNotebook>} deps.join
 * @param {(survey: string) => void} deps.open
 * @param {(notebook: OpenNotebook) => void} deps.done
 */
export function mountJoin(root, {code, joined, look, join, open, done}) {
  const main = el('main', {class: 'join', tabindex: '-1'});
  fill(root, main);
  root.dataset.screen = 'join';
  askCode('');
  if (code) void lookAt(code);

  /** @param {string} wrong */
  function askCode(wrong) {
    const input = el('input', {
      type: 'text',
      class: 'code',
      'aria-label': 'Joining code',
      autocapitalize: 'characters',
      autocomplete: 'off',
      spellcheck: 'false',
      value: code,
      onkeydown: (/** @type {KeyboardEvent} */ event) => event.key === 'Enter' && go(),
    });
    const go = () => (input.value.trim() ? void lookAt(input.value.trim()) : input.focus());
    fill(
      main,
      el('h1', {}, 'Ergbook'),
      el('p', {}, 'A field notebook for dune and desert ground surveys. It keeps your readings on this phone and says what they show, without a network.'),
      joined.length > 0 && el('section', {}, el('h2', {}, 'Open'), joined.map(({survey, name}) => el('button', {type: 'button', class: 'wide', dir: 'auto', onclick: () => open(survey)}, name))),
      el('h2', {}, 'Join a survey'),
      el('label', {class: 'field'}, el('span', {class: 'label', 'aria-hidden': 'true'}, 'Joining code, from the lead'), input),
      wrong && el('p', {class: 'problem', role: 'alert'}, wrong),
      el('button', {type: 'button', class: 'save', onclick: go}, 'Look'),
    );
  }

  /** @param {string} typed */
  async function lookAt(typed) {
    code = typed;
    fill(main, el('p', {role: 'status'}, 'Looking up the code.'));
    try {
      askWho(await look(typed));
    } catch (error) {
      askCode(inWords(error));
    }
  }

  /** @param {Looked} looked */
  function askWho({survey, crew}) {
    const wrong = el('p', {class: 'problem', role: 'alert', hidden: true});
    const own = el('input', {type: 'text', dir: 'auto', 'aria-label': 'Your name', maxlength: 80, autocomplete: 'name', placeholder: 'Your name', oninput: () => choose(null)});
    const names = crew.map((member) =>
      el('button', {type: 'button', 'aria-pressed': 'false', dir: 'auto', 'data-crew': member.record, onclick: () => choose(member.record)}, member.name),
    );
    const go = el('button', {type: 'button', class: 'save', onclick: () => void start()}, 'Join');
    /** @type {string | null} */
    let chosen = null;
    /** @param {string | null} record */
    function choose(record) {
      chosen = record;
      if (record) own.value = '';
      names.forEach((button) => button.setAttribute('aria-pressed', String(button.dataset.crew === record)));
    }
    async function start() {
      const name = own.value.trim();
      if (!chosen && !name) {
        say(wrong, 'Choose your name, or type it.');
        wrong.hidden = false;
        return;
      }
      const who = chosen ? {code, crew: chosen} : {code, name};
      await receive(who, () => askWho({survey, crew}));
    }
    fill(
      main,
      el('h1', {dir: 'auto'}, survey.name),
      el('h2', {}, 'Who are you?'),
      crew.length > 0 && el('div', {class: 'chips', role: 'group', 'aria-label': 'Crew'}, names),
      el('label', {class: 'field'}, el('span', {class: 'label', 'aria-hidden': 'true'}, crew.length ? 'Not among them' : 'Your name'), own),
      wrong,
      el('h2', {}, 'Before you walk out'),
      el('ul', {class: 'cautions'}, CONSTANTS.cautions.map((text) => el('li', {}, text))),
      el('div', {class: 'dock'}, go),
    );
  }

  /**
   * @param {{code: string, crew?: string, name?: string}} who
   * @param {() => void} again
   */
  async function receive(who, again) {
    const text = el('p', {role: 'status'}, 'Joining.');
    const bar = el('progress', {'aria-label': 'Receiving the survey'});
    fill(main, el('h1', {}, 'Receiving the survey'), text, bar, el('p', {class: 'help'}, 'Stay connected until this ends: afterwards no network is needed.'));
    try {
      done(await join(who, (received, of) => {
        bar.max = Math.max(1, of);
        bar.value = received;
        say(text, `${received} of ${of} entries received.`);
      }));
    } catch (error) {
      again();
      main.prepend(el('p', {class: 'problem', role: 'alert'}, inWords(error)));
    }
  }
}

/** @param {unknown} error */
export function inWords(error) {
  const problem = /** @type {{title?: string, detail?: string, mend?: string, message?: string}} */ (error);
  const what = problem.title ?? problem.message ?? String(error);
  const detail = problem.detail && problem.detail !== what ? `: ${problem.detail}` : '';
  return `${sentence(`${what}${detail}`)} ${problem.mend ? sentence(problem.mend) : ''}`.trim();
}

/** @param {string} text */
function sentence(text) {
  const begun = text.charAt(0).toUpperCase() + text.slice(1);
  return /[.?!]$/.test(begun) ? begun : `${begun}.`;
}
