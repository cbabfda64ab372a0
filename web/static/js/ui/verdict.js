// Verdict: the card with the leeway against what is asked, robot and shadows side
// by side, how it ended, and where they parted.

import { clock } from '../core/format.js';
import { partings, verdict } from '../core/verdict.js';
import { html, say, set } from '../dom.js';
import { part, sentence } from './why.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/protocol.js').Mark} Mark */

export class Verdict {
  #card;
  #seek;
  #big;
  #words;
  #judgement;
  #status;
  #reason;
  #ending;
  #parting;
  #show;
  #more;
  #list;
  #count;
  /** @type {Map<string, HTMLTableRowElement>} */
  #rows = new Map();
  #said = '';
  #first = '';
  /** @type {Mark | null} */
  #at = null;
  #version = -1;

  /**
   * @param {HTMLElement} card
   * @param {(tick: number) => void} seek
   */
  constructor(card, seek) {
    this.#card = card;
    this.#seek = seek;
    this.#big = part(card, '.big');
    this.#words = part(card, '.of');
    this.#judgement = part(card, '.judgement');
    this.#ending = part(card, '.ending');
    this.#status = part(card, '.status');
    this.#reason = part(card, '.reason');
    this.#parting = part(card, '.parting-words');
    this.#show = part(card, '.parting button');
    this.#more = part(card, 'details');
    this.#count = part(card, 'summary');
    this.#list = part(card, 'details ol');
    this.#show.addEventListener('click', () => this.#at && seek(this.#at.tick));
    for (const tr of card.querySelectorAll('tr[data-row]')) {
      if (tr instanceof HTMLTableRowElement) this.#rows.set(tr.dataset.row ?? '', tr);
    }
  }

  /** @param {State} state */
  draw({ hello, frame, tape }) {
    if (!hello || !frame) return;
    const v = verdict(frame, hello.asked, tape.farthest(frame.tick));
    set(this.#card, 'data-mark', v.mark);
    say(this.#big, v.leeway);
    say(this.#words, v.words);
    say(this.#judgement, v.judgement);
    set(this.#status, 'data-tone', v.tone);
    say(this.#status, v.status);
    if (v.reason !== this.#said) {
      this.#said = v.reason;
      this.#reason.replaceChildren(...sentence(v.reason));
      set(this.#ending, 'title', v.reason);
    }
    for (const r of v.rows) {
      const tr = this.#rows.get(r.key);
      if (!tr) continue;
      r.cells.forEach((c, i) => {
        const td = tr.cells[i + 1];
        say(td, c.text);
        set(td, 'class', c.bad ? 'bad' : null);
      });
      if (r.key === 'way') set(tr, 'title', v.shortest);
    }
    this.#partings(frame.tick, tape.marks, tape.version, hello.shadows, hello.tick_s);
  }

  /**
   * @param {number} now
   * @param {Mark[]} marks
   * @param {number} version
   * @param {boolean} shadows
   * @param {number} dt
   */
  #partings(now, marks, version, shadows, dt) {
    if (version !== this.#version) {
      this.#version = version;
      const all = partings(marks);
      this.#at = all[0] ?? null;
      const form = all.map((m) => m.tick).join(' ');
      if (form !== this.#list.getAttribute('data-form')) {
        set(this.#list, 'data-form', form);
        this.#list.replaceChildren(...all.map((m) => this.#item(m, dt)));
      }
      say(this.#count, all.length === 1 ? 'One parting' : `All ${all.length} partings`);
      set(this.#more, 'data-none', all.length === 0);
    }
    const words = this.#at ? this.#at.text : shadows ? 'Robot and shadows have not parted so far.' : 'The shadows are off: nothing to part from.';
    if (words !== this.#first) {
      this.#first = words;
      this.#parting.replaceChildren(...sentence(words));
      set(this.#parting, 'title', this.#at ? words : null);
      set(this.#show, 'hidden', !this.#at);
    }
    set(this.#parting, 'data-ahead', this.#at !== null && this.#at.tick > now);
  }

  /** @param {Mark} m @param {number} dt */
  #item(m, dt) {
    const button = html('button', { type: 'button', class: 'plain n', 'aria-label': `Show ${clock(m.tick * dt)}` }, clock(m.tick * dt));
    button.addEventListener('click', () => this.#seek(m.tick));
    return html('li', {}, button, ' ', ...sentence(m.text));
  }
}
