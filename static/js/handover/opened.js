/** A notebook that is open: rows in memory, saving, and its side of handing over. */

import {clockOffMs} from '../ledger/project.js';
import {Replica} from '../ledger/replica.js';
import {CONSTANTS} from '../sheet/declared.js';
import {draftsOf} from '../store/drafts.js';
import {forgetNotebook} from '../store/joined.js';
import {keepLearnt, load} from '../store/load.js';
import {freePhotos, keepPhoto} from '../store/photos.js';
import {Problem} from '../store/problem.js';
import {saveEntries} from '../store/save.js';
import {StoreApi} from './api.js';
import {isFiled, noteFiled, notebookFile} from './file.js';
import {markJoined} from './join.js';
import {Runner} from './runner.js';
import {saidInSave} from './saying.js';
import {PhotoShelf} from './shelf.js';

/** @typedef {import('../store/deps.js').Deps} Deps */
/** @typedef {import('../store/load.js').Kept} Kept */
/** @typedef {import('../store/open.js').Connection} Connection */
/** @typedef {import('../ledger/replica.js').KeptEntry} KeptEntry */
/** @typedef {import('../ledger/replica.js').Marks} Marks */
/** @typedef {import('./runner.js').HandoverState} HandoverState */
/** @typedef {import('./saying.js').PhotoTaken} PhotoTaken */
/** @typedef {import('./shelf.js').PhotoShown} PhotoShown */
/** @typedef {import('../sheet/declared.js').SurveyRow & Marks} SurveyShown */
/** @typedef {import('../sheet/declared.js').CrewRow & Marks} CrewShown */
/** @typedef {import('../sheet/declared.js').SiteRow & Marks} SiteShown */
/** @typedef {import('../sheet/declared.js').ObservationRow & Marks} ObservationShown */
/** @typedef {{survey: string, name: string, crew: string, crewName: string, device: string, store: string}} NotebookInfo */
/** @typedef {'rows' | 'handover'} Changed */
/** @typedef {{entries?: KeptEntry[], photo?: {sha256: string, changes: {isSent: boolean, problem: string}}, reload?: boolean}} News between pages */

export class Notebook {
  /**
   * Use `openNotebook` or `join`.
   * @param {Deps} deps
   * @param {Connection} connection
   * @param {Kept} kept
   */
  constructor(deps, connection, kept) {
    this.deps = deps;
    this.connection = connection;
    this.kept = kept;
    this.ending = new AbortController();
    this.api = new StoreApi(deps, () => this.kept.info, this.ending.signal);
    /** @type {Set<(changed: Changed) => void>} */
    this.listeners = new Set();
    /** @type {Promise<unknown>} saves of one page go one after the other */
    this.saving = Promise.resolve();
    this.replica = new Replica();
    /** @type {Map<number, number>} own entries without an answer: n -> when made */
    this.unsent = new Map();
    this.shelf = new PhotoShelf(this);
    this.#build();
    /** Open forms: `get(key)`, `put(key, value)`, `delete(key)`, each a promise. */
    this.draft = draftsOf(connection);
    this.runner = new Runner(this.#desk(), () => this.#changed('handover'));
    this.channel = deps.channel(`ergbook-${kept.info.survey}`);
    this.channel?.addEventListener('message', (event) => void this.#heardFromPage(event.data));
  }

  /**
   * Who this notebook is.
   * @returns {NotebookInfo}
   */
  get info() {
    const {survey, name, crew, device, store} = this.kept.info;
    const crewName = String(this.replica.row('crew', crew)?.name ?? '');
    return {survey, name: this.survey()?.name ?? name, crew, crewName, device, store};
  }

  /** @returns {SurveyShown | null} */
  survey() {
    return /** @type {any} */ (this.replica.rows('survey')[0] ?? null);
  }

  /** @returns {CrewShown[]} */
  crew() {
    return /** @type {any[]} */ (this.replica.rows('crew'));
  }

  /** @returns {SiteShown[]} crossed out ones too */
  sites() {
    return /** @type {any[]} */ (this.replica.rows('site'));
  }

  /**
   * Observations in the order in which they were made; crossed out ones too.
   * @param {{site?: string}} [only]
   * @returns {ObservationShown[]}
   */
  observations({site} = {}) {
    const rows = this.replica.rows('observation');
    return /** @type {any[]} */ (site === undefined ? rows : rows.filter((row) => row.site === site));
  }

  /**
   * The photos of an observation; crossed out ones too.
   * @param {string} observation
   * @returns {PhotoShown[]}
   */
  photos(observation) {
    return this.shelf.of(observation);
  }

  /**
   * Save: a new record, or with `record` a change of one. Only what differs is said; nothing
   * differing resolves with `entry: null`. Resolves when it is durable, and not before; rejects
   * with a Problem, and then nothing was saved. A record that base had set aside is said anew as
   * another record, whose id is returned.
   * @param {'observation' | 'photo' | 'track'} kind
   * @param {Record<string, unknown>} set field -> wire value; null takes a value away
   * @param {{record?: string, photos?: PhotoTaken[], draft?: string}} [options] `draft`: key of the draft that this makes good
   * @returns {Promise<{record: string, entry: string | null}>}
   */
  save(kind, set, options = {}) {
    const result = this.saving.then(() => this.#save(kind, set, options));
    this.saving = result.catch(() => {});
    return result;
  }

  /**
   * What is on this phone only. `setAside`: entries that base refused and that are not mended.
   * @returns {{unsent: number, unsentPhotos: number, oldestUnsentAt: string | null, setAside: number, fromNewerApp: number}}
   */
  counts() {
    const oldest = Math.min(...this.unsent.values());
    return {
      unsent: this.unsent.size,
      unsentPhotos: this.shelf.toSend().length,
      oldestUnsentAt: this.unsent.size ? new Date(oldest).toISOString() : null,
      setAside: CONSTANTS.phone_kinds.flatMap((kind) => this.replica.rows(kind)).reduce((sum, row) => sum + row.setAside.length, 0),
      fromNewerApp: this.replica.newer.size,
    };
  }

  /**
   * All that this phone holds, as a file for the lead; `noteFiled` once it was saved.
   * @returns {Promise<import('./file.js').NotebookFile>}
   */
  toFile() {
    return notebookFile(this);
  }

  /** The file was saved. */
  async noteFiled() {
    await noteFiled(this);
    this.#changed('handover');
  }

  /**
   * What keeps this survey on the phone; '' where base has everything, or a file that was saved does.
   * @returns {Promise<string>}
   */
  async whyStay() {
    const {unsent, unsentPhotos, setAside} = this.counts();
    if (!(unsent || unsentPhotos || setAside) || (await isFiled(this))) return '';
    return 'Some of it is on this phone only. Hand over, or save everything to a file first.';
  }

  /**
   * Take this survey off the phone for good; ask `whyStay` first.
   * @returns {Promise<void>} rejects with a Problem
   */
  async leave() {
    await this.close();
    await forgetNotebook(this.deps, this.kept.info.survey);
  }

  /** Bytes that `freePhotos` would free. */
  freeableBytes() {
    return this.shelf.freeable;
  }

  /** Take photos off the phone that base holds; thumbnails stay. */
  async freePhotos() {
    this.shelf.add(await freePhotos(this.connection));
    this.#changed('rows');
  }

  /**
   * Pairs of dunes of a site that a lead has called one.
   * @param {string} site
   * @returns {[string, string][]}
   */
  sameDunes(site) {
    return this.replica.rows('same_dune')
      .filter((row) => row.site === site && !row.crossed_out)
      .map((row) => [String(row.dune), String(row.other)]);
  }

  /** How far this phone's clock is taken to be off, milliseconds: base's less its own. */
  clockOffMs() {
    return clockOffMs(this.kept.offsetMs);
  }

  /** Handing over: `start()`, `stop()`, `now()`, and `state`. */
  get handover() {
    const {runner} = this;
    return {
      start: () => runner.start(),
      stop: () => runner.stop(),
      now: () => runner.now(),
      /** @returns {HandoverState} */
      get state() {
        return runner.state;
      },
    };
  }

  /**
   * @param {(changed: Changed) => void} listener called after rows or the state of hand-over changed
   * @returns {() => void} ends it
   */
  onChange(listener) {
    this.listeners.add(listener);
    return () => this.listeners.delete(listener);
  }

  /** Let go of the database; what is being saved is saved first. */
  async close() {
    this.runner.stop();
    this.ending.abort();
    await this.saving;
    this.channel?.close();
    this.channel = null; // a hand-over that is just ending has nobody left to tell
    this.listeners.clear();
    await this.connection.close();
  }

  /**
   * Receive the survey whole, then count as joined.
   * @param {(done: number, of: number) => void} onProgress
   * @returns {Promise<void>}
   */
  async receiveWhole(onProgress) {
    await this.runner.receiveWhole(onProgress);
    const {survey, name} = this.info;
    this.kept.info = await markJoined(this.deps, this.connection, {survey, name});
    this.#tell({reload: true});
  }

  /**
   * @param {string} kind
   * @param {Record<string, unknown>} set
   * @param {{record?: string, photos?: PhotoTaken[], draft?: string}} options
   */
  async #save(kind, set, {record, photos = [], draft}) {
    if (!CONSTANTS.phone_kinds.includes(kind)) {
      throw new Problem(`Not saved: a ${kind} is not said on a phone`, '', 'The lead changes it at base.');
    }
    if (record !== undefined && this.replica.merged(record)?.created?.body.kind !== kind) {
      throw new Problem(`Not saved: there is no ${kind} ${record} on this phone`, '', 'Go back and choose it again.');
    }
    const shelved = [];
    for (const photo of photos) {
      shelved.push({...photo, kept: await keepPhoto(this.connection, this.deps, photo.bytes, photo.thumbnail)});
    }
    const said = saidInSave(this.replica, {kind, set, record, photos: shelved});
    const entries = await saveEntries(this.connection, this.deps, this.kept, said, {draft});
    this.shelf.add(shelved.map(({kept}) => kept));
    this.#take(entries);
    this.#tell({entries});
    this.runner.soon();
    const [first] = entries;
    const entry = first ? `${first.device}-${first.n}` : null;
    const isNew = said[0] && !said[0].record && said[0].kind === kind;
    return {record: isNew && entry ? entry : String(record), entry};
  }

  /** @returns {import('./runner.js').Desk} */
  #desk() {
    const notebook = this;
    return {
      deps: this.deps,
      connection: this.connection,
      get kept() {
        return notebook.kept;
      },
      api: this.api,
      take: (entries) => {
        this.#take(entries);
        this.#tell({entries});
      },
      reload: async () => {
        await this.#reload();
        this.#tell({reload: true});
      },
      heard: (answer) => this.#learnTime(answer),
      sent: (count) => this.runner.set({sent: this.runner.state.sent + count}),
      photosToSend: () => this.shelf.toSend(),
      photoMarked: (sha256, changes) => {
        this.shelf.mark(sha256, changes);
        this.#tell({photo: {sha256, changes}});
        if (changes.isSent) this.runner.set({photosSent: this.runner.state.photosSent + 1});
        this.#changed('rows');
      },
      counts: () => this.counts(),
    };
  }

  /** @param {import('./api.js').Answer} answer */
  async #learnTime({body, sentAtMs, gotAtMs}) {
    const offsetMs = Math.round(Date.parse(body.time) - (sentAtMs + gotAtMs) / 2);
    if (!Number.isFinite(offsetMs)) return;
    this.runner.set({offsetMs});
    if (offsetMs === this.kept.offsetMs) return;
    this.kept.offsetMs = offsetMs;
    await keepLearnt(this.connection, 'offset', offsetMs);
  }

  #build() {
    this.replica = new Replica();
    this.unsent.clear();
    this.shelf.clear();
    this.shelf.add(this.kept.photos);
    this.#note(this.kept.entries);
    this.replica.take(this.kept.entries);
    this.kept.entries = [];
  }

  async #reload() {
    const kept = await load(this.connection);
    if (!kept) return;
    Object.assign(this.kept, kept);
    this.#build();
    this.#changed('rows');
  }

  /** @param {KeptEntry[]} entries */
  #take(entries) {
    if (!entries.length) return;
    this.#note(entries);
    this.replica.take(entries);
    this.#changed('rows');
  }

  /** @param {KeptEntry[]} entries */
  #note(entries) {
    for (const {device, n, seq, problem, text} of entries) {
      if (device !== this.kept.info.device) continue;
      if (seq === null && !problem) this.unsent.set(n, Date.parse(JSON.parse(text).made_at));
      else this.unsent.delete(n);
    }
  }

  /** @param {News} news */
  #tell(news) {
    this.channel?.postMessage(news);
  }

  /** @param {News} news */
  async #heardFromPage({entries, photo, reload}) {
    if (reload) await this.#reload();
    if (photo) this.shelf.mark(photo.sha256, photo.changes);
    if (entries) this.#take(entries);
    if (photo) this.#changed('rows');
    if (entries?.some(({seq}) => seq === null)) this.runner.soon();
  }

  /** @param {Changed} changed */
  #changed(changed) {
    for (const listener of [...this.listeners]) listener(changed);
  }
}
