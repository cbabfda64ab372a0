// Brief: the scenario as a sentence. Its numbers are edited where they stand, by
// typing, by the up and down keys, or by dragging sideways; words with dots below
// are choices. What is wrong with a number is said right below it, over the page,
// so that nothing moves.

import * as entry from '../core/entry.js';
import { glue } from '../core/glue.js';
import { html, say, set } from '../dom.js';

/** @typedef {import('../core/protocol.js').Part} Part */
/** @typedef {import('../core/state.js').State} State */

/**
 * @typedef {object} Changed
 * @property {(path: string, value: number) => boolean} number false: there is no connection
 * @property {(path: string, value: string) => boolean} choice
 */

/** Steps by key are sent when no other has come for this long, ms. */
const REST = 300;
/** A sideways drag of a number that applies at once is sent this often, ms. */
const SCRUB = 120;
/** Pixels that a pointer may stray and still be a click. */
const CLICK = 4;

/** What a change does, in words. */
const APPLIES = { now: 'applies to the running robot', restart: 'restarts the run' };

export class Brief {
  #root;
  #changed;
  /** @type {Part[] | null} */
  #parts = null;
  /** @type {Map<string, NumberField | ChoiceField>} */
  #fields = new Map();
  #form = '';
  #problem = 0;

  /**
   * @param {HTMLElement} root
   * @param {Changed} changed
   */
  constructor(root, changed) {
    this.#root = root;
    this.#changed = changed;
  }

  /**
   * Whether a number or choice of this path stands in the brief.
   * @param {string} path
   */
  has(path) {
    return this.#fields.has(path);
  }

  /** @param {State} state */
  draw(state) {
    const { hello, problem } = state;
    if (hello && hello.brief !== this.#parts) {
      this.#parts = hello.brief;
      this.#show(hello.brief);
    }
    if (problem && problem.serial !== this.#problem) {
      this.#problem = problem.serial;
      this.#fields.get(problem.about)?.refuse(problem.text);
    }
  }

  /**
   * The same sentence with other values keeps its elements, and with them the
   * focus and what is being typed.
   * @param {Part[]} parts
   */
  #show(parts) {
    const form = JSON.stringify(parts.map((p) => [p.text, p.number, p.unit, p.choice, p.options]));
    if (form !== this.#form) {
      this.#form = form;
      this.#fields.clear();
      const nodes = glue(parts).map(({ part, tail }) => this.#node(part, tail));
      const focused = document.activeElement;
      const path = focused && this.#root.contains(focused) ? focused.getAttribute('data-path') : null;
      this.#root.replaceChildren(...nodes);
      // A choice may change the sentence round it; whoever chose stays at it.
      if (path) this.#fields.get(path)?.focus();
    }
    for (const p of parts) this.#fields.get(p.number ?? p.choice ?? '')?.show(p);
  }

  /**
   * @param {Part} p
   * @param {string} tail punctuation right behind it
   */
  #node(p, tail) {
    if (p.number) {
      const field = new NumberField(p, tail, (v) => this.#changed.number(p.number ?? '', v));
      this.#fields.set(p.number, field);
      return field.root;
    }
    if (p.choice) {
      const field = new ChoiceField(p, tail, (v) => this.#changed.choice(p.choice ?? '', v));
      this.#fields.set(p.choice, field);
      return field.root;
    }
    return document.createTextNode(p.text ?? '');
  }
}

let ids = 0;

class NumberField {
  #part;
  #send;
  #input;
  #note;
  /** What the server last said. */
  #value = 0;
  /** What has been sent since, and not been answered. @type {number | null} */
  #sent = null;
  /** A step that has been shown and not yet sent. */
  #timer = 0;
  #typing = false;

  /**
   * @param {Part} part
   * @param {string} tail
   * @param {(value: number) => boolean} send
   */
  constructor(part, tail, send) {
    this.#part = part;
    this.#send = send;
    const note = `note-${++ids}`;
    this.#input = html('input', {
      type: 'text', inputmode: 'decimal', autocomplete: 'off', spellcheck: 'false', enterkeyhint: 'done',
      role: 'spinbutton', 'aria-label': label(part), 'aria-describedby': note, 'data-path': part.number ?? '',
    });
    this.#note = html('span', { class: 'note', id: note });
    const unit = part.unit ? [html('span', { class: 'unit', 'aria-hidden': 'true' }, `\u2009${part.unit}`)] : [];
    const box = html('span', { class: 'entry' }, this.#input, ...unit);
    this.root = html('span', { class: 'num' }, box, tail, this.#note);
    this.#hint();
    this.#listen();
  }

  /** @returns {entry.Range} */
  get #range() {
    const { min = -Infinity, max = Infinity, step = 1, decimals = 0, unit = '' } = this.#part;
    return { min, max, step, decimals, unit };
  }

  focus() {
    this.#input.focus();
  }

  /**
   * A value from the server. It does not disturb what is being typed.
   * @param {Part} part
   */
  show(part) {
    this.#part = part;
    this.#value = Number(part.value);
    this.#sent = null;
    set(this.#input, 'aria-valuemin', part.min);
    set(this.#input, 'aria-valuemax', part.max);
    if (this.#typing || this.#timer) return;
    this.#write(this.#value);
    // A refusal stays until somebody does something about it.
    if (this.root.dataset.bad === undefined) this.#hint();
  }

  /**
   * The server would not have the value.
   * @param {string} words
   */
  refuse(words) {
    this.#cancel();
    this.#sent = null;
    this.#complain(words);
    this.#write(this.#value);
  }

  /** @param {number} v */
  #write(v) {
    this.#input.value = entry.format(v, this.#range);
    set(this.#input, 'aria-valuenow', v);
    set(this.#input, 'aria-valuetext', `${this.#input.value} ${this.#part.unit ?? ''}`.trim());
    this.#fit();
  }

  /**
   * As wide as what is in it, since the face is monospaced, and no narrower than
   * what was: the sentence does not break anew while somebody types.
   */
  #fit() {
    const least = this.#typing ? entry.format(this.#value, this.#range).length : 1;
    this.#input.style.width = `${Math.max(this.#input.value.length, least)}ch`;
  }

  #hint() {
    set(this.root, 'data-bad', null);
    set(this.#input, 'aria-invalid', null);
    set(this.#note, 'role', null);
    const does = this.#part.applies ? `; ${APPLIES[this.#part.applies]}` : '';
    say(this.#note, `${label(this.#part)}, ${entry.rangeText(this.#range)}${does}`);
  }

  /** @param {string} words */
  #complain(words) {
    set(this.root, 'data-bad', true);
    set(this.#input, 'aria-invalid', 'true');
    set(this.#note, 'role', 'alert');
    say(this.#note, words);
    keepInView(this.#note);
  }

  #listen() {
    const input = this.#input;
    input.addEventListener('focus', () => {
      input.select();
      keepInView(this.#note);
    });
    input.addEventListener('input', () => {
      this.#typing = true;
      this.#cancel();
      this.#fit();
      const wrong = entry.problem(entry.parse(input.value, this.#part.unit), this.#range);
      // A number that is not finished yet is not a fault yet.
      if (!wrong) this.#hint();
    });
    input.addEventListener('blur', () => this.#commit());
    input.addEventListener('keydown', (event) => {
      switch (event.key) {
        case 'Enter':
          this.#commit();
          input.select();
          break;
        case 'Escape':
          this.#cancel();
          this.#typing = false;
          this.#write(this.#sent ?? this.#value);
          this.#hint();
          input.select();
          break;
        case 'ArrowUp':
        case 'ArrowDown':
          this.#stepBy((event.key === 'ArrowUp' ? 1 : -1) * (event.shiftKey ? 10 : 1));
          break;
        default:
          return;
      }
      event.preventDefault();
      event.stopPropagation();
    });
    this.#scrub();
  }

  /** Takes what was typed, when it can be taken. */
  #commit() {
    this.#cancel();
    if (!this.#typing) {
      this.#sendIfNew();
      return;
    }
    const v = entry.parse(this.#input.value, this.#part.unit);
    const wrong = entry.problem(v, this.#range);
    if (wrong || v === null) {
      this.#complain(wrong ?? '');
      return;
    }
    this.#typing = false;
    this.#hint();
    this.#write(v);
    this.#sendIfNew();
  }

  #sendIfNew() {
    const v = entry.parse(this.#input.value, this.#part.unit);
    if (v === null || v === (this.#sent ?? this.#value) || entry.problem(v, this.#range)) return;
    if (this.#send(v)) this.#sent = v;
    else this.refuse('The connection is lost; the number stays as it was.');
  }

  /** @param {number} n */
  #stepBy(n) {
    const typed = entry.parse(this.#input.value, this.#part.unit);
    this.#typing = false;
    this.#hint();
    this.#write(entry.step(typed ?? this.#sent ?? this.#value, n, this.#range));
    this.#input.select(); // what is typed next takes its place
    this.#later(REST);
  }

  /** @param {number} ms */
  #later(ms) {
    clearTimeout(this.#timer);
    this.#timer = window.setTimeout(() => {
      this.#timer = 0;
      this.#sendIfNew();
    }, ms);
  }

  /** What waits to be sent is not. */
  #cancel() {
    clearTimeout(this.#timer);
    this.#timer = 0;
  }

  /** A drag sideways; a press without one is a click, and the field takes the focus. */
  #scrub() {
    const root = this.root;
    const input = this.#input;
    let x = 0;
    let from = 0;
    let down = false;
    let scrubbing = false;
    let sent = 0;
    root.addEventListener('pointerdown', (event) => {
      // In a field that has the focus the pointer selects text.
      if (event.button !== 0 || document.activeElement === input) return;
      event.preventDefault();
      down = true;
      scrubbing = false;
      x = event.clientX;
      from = this.#sent ?? this.#value;
      root.setPointerCapture(event.pointerId);
    });
    root.addEventListener('pointermove', (event) => {
      if (!down) return;
      const dx = event.clientX - x;
      if (!scrubbing && Math.abs(dx) < CLICK) return;
      if (!scrubbing) this.#hint();
      scrubbing = true;
      root.classList.add('scrubbing');
      this.#write(entry.scrub(from, dx, event.shiftKey, this.#range));
      if (this.#part.applies === 'now' && event.timeStamp - sent > SCRUB) {
        sent = event.timeStamp;
        this.#sendIfNew();
      }
      // Until it is sent, what the server says of the number waits.
      this.#later(60_000);
    });
    const up = (/** @type {PointerEvent} */ event) => {
      if (!down) return;
      down = false;
      root.classList.remove('scrubbing');
      this.#cancel();
      if (event.type === 'pointercancel') {
        this.#write(this.#value);
      } else if (scrubbing) {
        this.#sendIfNew();
      } else {
        input.focus();
      }
    };
    root.addEventListener('pointerup', up);
    root.addEventListener('pointercancel', up);
  }
}

class ChoiceField {
  #select;
  #note;
  #part;
  #send;

  /**
   * @param {Part} part
   * @param {string} tail
   * @param {(value: string) => boolean} send
   */
  constructor(part, tail, send) {
    this.#part = part;
    this.#send = send;
    const note = `note-${++ids}`;
    const options = (part.options ?? []).map((o) => html('option', { value: o.value }, o.label));
    this.#select = html('select', { 'aria-label': label(part), 'aria-describedby': note, 'data-path': part.choice ?? '' }, ...options);
    this.#note = html('span', { class: 'note', id: note });
    this.root = html('span', { class: 'choice' }, this.#select, tail, this.#note);
    this.#hint();
    this.#select.addEventListener('focus', () => keepInView(this.#note));
    this.#select.addEventListener('change', () => {
      this.#hint();
      if (!this.#send(this.#select.value)) this.refuse('The connection is lost; the choice stays as it was.');
    });
  }

  focus() {
    this.#select.focus();
  }

  #hint() {
    set(this.root, 'data-bad', null);
    set(this.#note, 'role', null);
    say(this.#note, `${label(this.#part)}${this.#part.applies ? `; ${APPLIES[this.#part.applies]}` : ''}`);
  }

  /** @param {Part} part */
  show(part) {
    this.#part = part;
    this.#select.value = String(part.value);
  }

  /** @param {string} words */
  refuse(words) {
    set(this.root, 'data-bad', true);
    set(this.#note, 'role', 'alert');
    say(this.#note, words);
    keepInView(this.#note);
    this.#select.value = String(this.#part.value);
  }
}

/**
 * Moves a note to the left by as much as it would stick out on the right.
 * @param {HTMLElement} note
 */
function keepInView(note) {
  note.style.translate = '';
  const over = note.getBoundingClientRect().right - document.documentElement.clientWidth + 8;
  if (over > 0) note.style.translate = `${-Math.ceil(over)}px 0`;
}

/** @param {Part} p */
const label = (p) => p.label ?? p.number ?? p.choice ?? '';
