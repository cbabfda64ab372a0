// Handles: what the Tab key reaches, in the order in which things were made, with
// a ring round what has the focus. Arrow keys move it; whoever listens to the
// floor's keys does that.
//
// On a floor with very many solids the solids share one handle: Page Down and
// Page Up choose among them, so that Tab still gets across the page.

import { toScreen } from '../core/camera.js';
import { place } from '../core/format.js';
import { set, svg } from '../dom.js';

/** @typedef {import('../core/camera.js').Camera} Camera */
/** @typedef {import('../core/things.js').Thing} Thing */
/** @typedef {import('../core/things.js').Places} Places */

/** With more things than this the solids share a handle. */
const MOST = 300;
/** Room between a thing and its ring, and the least size of a ring, px. */
const ROOM = 6;
const LEAST = 15;

/**
 * @typedef {object} Handle
 * @property {SVGGElement} group
 * @property {SVGRectElement} ring
 * @property {Thing[]} things one, or all that share the handle
 * @property {number} chosen
 */

export class Handles {
  layer = svg('g', { class: 'handles' });
  /** @type {Handle[]} */
  #handles = [];
  /** @type {Thing[] | null} */
  #things = null;
  /** @type {Camera | null} */
  #camera = null;
  /** @type {Handle | null} */
  #focused = null;

  constructor() {
    this.layer.addEventListener('focusin', (event) => {
      this.#focused = this.#of(event.target);
      this.#things && this.#camera && this.#label();
    });
    this.layer.addEventListener('focusout', () => {
      this.#focused = null;
    });
  }

  /**
   * The thing that has the focus.
   * @returns {Thing | null}
   */
  get thing() {
    return this.#focused ? this.#focused.things[this.#focused.chosen] : null;
  }

  /**
   * Goes to another of the things that share the handle; false when it is not
   * shared.
   * @param {number} by
   */
  choose(by) {
    const h = this.#focused;
    if (!h || h.things.length < 2) return false;
    h.chosen = (h.chosen + by + h.things.length) % h.things.length;
    return true;
  }

  /** @type {Places | null} */
  #places = null;

  /**
   * @param {Camera} camera
   * @param {Places} places
   * @param {Thing[]} things
   * @param {string | null} held key of the thing a hand has hold of
   * @param {string | null} hovered
   */
  draw(camera, places, things, held, hovered) {
    this.#places = places;
    const fresh = things !== this.#things;
    if (fresh) this.#rebuild(things);
    const all = fresh || camera !== this.#camera;
    this.#camera = camera;
    for (const h of this.#handles) {
      const t = h.things[h.chosen];
      const lit = t.key === held ? 'handle held' : t.key === hovered ? 'handle hover' : 'handle';
      set(h.group, 'class', lit);
      // Solids stand still but for those that a hand moves, here or elsewhere.
      if (all || t.what !== 'solid' || places.moved.has(t.id) || h === this.#focused || lit !== 'handle') this.#place(h, camera, places);
    }
    if (this.#focused) this.#label();
  }

  /**
   * @param {Handle} h
   * @param {Camera} camera
   * @param {Places} places
   */
  #place(h, camera, places) {
    const t = h.things[h.chosen];
    const [x, y] = toScreen(camera, ...places.middle(t));
    const [a, b] = places.half(t).map((v) => Math.max(v * camera.scale + ROOM, LEAST));
    set(h.ring, 'x', Math.round(x - a));
    set(h.ring, 'y', Math.round(y - b));
    set(h.ring, 'width', Math.round(2 * a));
    set(h.ring, 'height', Math.round(2 * b));
  }

  /** The place belongs to the name of what has the focus. */
  #label() {
    const h = this.#focused;
    if (!h || !this.#places) return;
    const t = h.things[h.chosen];
    set(h.group, 'aria-label', `${nameOf(h)}, at ${place(...this.#places.anchor(t))}`);
  }

  /**
   * The same handles stay for the same things, so that the focus does.
   * @param {Thing[]} things
   */
  #rebuild(things) {
    this.#things = things;
    const shared = things.length > MOST ? things.filter((t) => t.what === 'solid') : [];
    const groups = things.filter((t) => !shared.includes(t)).map((t) => [t]);
    if (shared.length > 0) groups.push(shared);
    const before = new Map(this.#handles.map((h) => [h.things[0].key, h]));
    this.#handles = groups.map((group) => {
      const old = before.get(group[0].key);
      if (old) {
        old.things = group;
        old.chosen = Math.min(old.chosen, group.length - 1);
        return old;
      }
      const ring = svg('rect', { class: 'ring', rx: 7 });
      const handle = svg('g', { tabindex: 0, role: 'button', 'aria-roledescription': 'movable', class: 'handle' }, ring);
      const h = { group: handle, ring, things: group, chosen: 0 };
      set(handle, 'aria-label', nameOf(h));
      set(handle, 'data-thing', group[0].key);
      return h;
    });
    const groupsNow = this.#handles.map((h) => h.group);
    const same = this.layer.children.length === groupsNow.length && groupsNow.every((g, i) => this.layer.children[i] === g);
    if (!same) this.layer.replaceChildren(...groupsNow);
  }

  /** @param {EventTarget | null} target */
  #of(target) {
    return this.#handles.find((h) => h.group === target) ?? null;
  }
}

/** @param {Handle} h */
function nameOf(h) {
  const t = h.things[h.chosen];
  if (h.things.length < 2) return t.label;
  return `${t.label}, ${h.chosen + 1} of ${h.things.length}, page down for the next`;
}
