// Floor: puts the layers of the picture together and turns gestures into holds
// of things and into looks of the camera.

import * as camera from '../core/camera.js';
import { move, nudged, take } from '../core/drag.js';
import { place } from '../core/format.js';
import { Places } from '../core/things.js';
import { say, set, svg } from '../dom.js';
import { Beams } from './beams.js';
import { listen } from './gesture.js';
import { Ground } from './ground.js';
import { Handles } from './handles.js';
import { Movers } from './movers.js';
import { Pins } from './pins.js';
import { Robot } from './robot.js';
import { Shades } from './shades.js';
import { Solids } from './solids.js';
import { Ways } from './ways.js';

/** @typedef {import('../core/state.js').State} State */
/** @typedef {import('../core/things.js').Thing} Thing */
/** @typedef {import('../core/protocol.js').Point} Point */

/**
 * What the floor tells the bench.
 * @typedef {object} Told
 * @property {(thing: Thing, anchor: Point) => State} hold a thing is at another place; returns the state with it there
 * @property {() => void} release
 * @property {(words: string) => void} announce
 * @property {() => void} redraw
 */

/** How near a pointer must come to a thing, px. */
const MOUSE_SLACK = 5;
const TOUCH_SLACK = 16;
/** A thing moved by keys is let go of when no key has come for this long, ms. */
const KEYS_REST = 450;

export class Floor {
  #surface;
  #readout;
  #told;
  #ground = new Ground();
  #solids = new Solids();
  #movers = new Movers();
  #ways = new Ways();
  #shades = new Shades();
  #beams = new Beams();
  #robot = new Robot();
  #pins = new Pins();
  #handles = new Handles();
  #world;
  /** @type {camera.Camera | null} */
  #camera = null;
  /** @type {State | null} */
  #state = null;
  /** @type {Places | null} */
  #places = null;
  /** @type {import('../core/drag.js').Drag | null} */
  #drag = null;
  /** @type {string | null} */
  #hovered = null;
  #keysTimer = 0;
  /** @type {string} bounds of the floor that the camera was made for */
  #boundsKey = '';

  /**
   * @param {SVGSVGElement} surface
   * @param {Element} readout of the cursor's place
   * @param {Told} told
   */
  constructor(surface, readout, told) {
    this.#surface = surface;
    this.#readout = readout;
    this.#told = told;
    this.#world = svg('g', { class: 'world' },
      this.#movers.routes, this.#ways.layer, this.#solids.layer, this.#movers.layer,
      this.#beams.layer, this.#shades.layer, this.#robot.belief, this.#robot.layer, this.#beams.echoes);
    surface.append(this.#ground.under, this.#pins.marks, this.#world, this.#pins.words, this.#pins.closest, this.#ground.over, this.#handles.layer);
    new ResizeObserver(() => this.#resized()).observe(surface);
    this.#listen();
  }

  /** @param {State} state */
  draw(state) {
    this.#state = state;
    const { hello, frame } = state;
    if (!hello || !frame) return;
    this.#aim(hello.bounds);
    const c = this.#camera;
    if (!c) return;
    const places = new Places(hello, frame, state.held, state.taken);
    this.#places = places;
    set(this.#world, 'transform', camera.matrix(c));
    this.#ground.draw(c, hello.bounds);
    this.#solids.draw(places);
    this.#movers.draw(places);
    const robot = this.#anchor('robot', places);
    const at = [robot, ...[0, 1].map((i) => /** @type {Point | null} */ (frame.shadows[i]?.pose.slice(0, 2) ?? null))];
    this.#ways.draw(state.tape.ways, frame.tick, at, hello.modes, state.old);
    this.#shades.draw(hello, frame.shadows);
    this.#beams.draw(hello, frame, robot);
    this.#robot.draw(hello, frame, robot);
    this.#pins.draw(c, hello, frame, this.#anchor('start', places), this.#anchor('goal', places));
    this.#handles.draw(c, places, state.things, state.held?.live ? state.held.key : null, this.#hovered);
  }

  /** @param {number} factor */
  zoom(factor) {
    if (this.#camera) this.#zoom([this.#camera.width / 2, this.#camera.height / 2], factor);
  }

  /** Shows all of the floor. */
  fit() {
    if (!this.#camera || !this.#state?.hello) return;
    this.#camera = camera.fit(this.#state.hello.bounds, this.#camera.width, this.#camera.height);
    this.#told.redraw();
  }

  /** @param {string} key @param {Places} places */
  #anchor(key, places) {
    const t = this.#state?.things.find((thing) => thing.key === key);
    return t ? places.anchor(t) : /** @type {Point} */ ([0, 0]);
  }

  /**
   * A camera for this floor; a floor of another size starts fitted.
   * @param {camera.Bounds} bounds
   */
  #aim(bounds) {
    const key = bounds.join(' ');
    if (this.#camera && key === this.#boundsKey) return;
    const { width, height } = this.#surface.getBoundingClientRect();
    if (width === 0) return;
    this.#boundsKey = key;
    this.#camera = camera.fit(bounds, width, height);
  }

  #resized() {
    const { width, height } = this.#surface.getBoundingClientRect();
    if (this.#camera && this.#state?.hello && width > 0) {
      this.#camera = camera.resize(this.#camera, this.#state.hello.bounds, width, height);
    }
    this.#told.redraw();
  }

  #listen() {
    listen(this.#surface, {
      take: (at, touch) => this.#take(at, touch),
      drag: (at, snapped) => this.#dragTo(at, snapped),
      drop: () => this.#drop(),
      restore: () => this.#restore(),
      pan: (dx, dy) => {
        if (!this.#camera || !this.#state?.hello) return;
        this.#camera = camera.pan(this.#camera, this.#state.hello.bounds, dx, dy);
        this.#told.redraw();
      },
      zoom: (at, factor) => this.#zoom(at, factor),
      fit: () => this.fit(),
      hover: (at, touch) => this.#hover(at, touch),
      nudge: (by) => this.#nudge(by),
      choose: (by) => this.#choose(by),
    });
    // Leaving a thing that keys have moved lets go of it at once.
    this.#handles.layer.addEventListener('focusout', () => this.#restKeys());
  }

  /** @param {Point} at @param {number} factor */
  #zoom(at, factor) {
    if (!this.#camera || !this.#state?.hello) return;
    this.#camera = camera.zoomAbout(this.#camera, this.#state.hello.bounds, at[0], at[1], factor);
    this.#told.redraw();
  }

  /**
   * @param {Point} at
   * @param {boolean} touch
   * @returns {Thing | null}
   */
  #thingAt(at, touch) {
    if (!this.#camera || !this.#places || !this.#state) return null;
    const [x, y] = camera.toWorld(this.#camera, at[0], at[1]);
    const slack = (touch ? TOUCH_SLACK : MOUSE_SLACK) / this.#camera.scale;
    const { things } = this.#state;
    const word = this.#pins.wordAt(at[0], at[1]);
    const under = this.#places.pick(things, x, y, slack);
    if (word && (!under || under.what === 'solid')) return things.find((t) => t.key === word) ?? null;
    return under;
  }

  /** @param {Point} at @param {boolean} touch */
  #take(at, touch) {
    const thing = this.#thingAt(at, touch);
    if (!thing || !this.#camera || !this.#places || !this.#state) return false;
    if (this.#state.link !== 'live') {
      this.#told.announce('Nothing can be moved while the connection is lost.');
      return true;
    }
    this.#restKeys();
    this.#drag = take(thing, this.#places.anchor(thing), camera.toWorld(this.#camera, at[0], at[1]));
    return true;
  }

  /** @param {Point} at @param {boolean} snapped */
  #dragTo(at, snapped) {
    if (!this.#drag || !this.#camera || !this.#state?.hello) return;
    this.#drag = move(this.#drag, camera.toWorld(this.#camera, at[0], at[1]), snapped, this.#state.hello.bounds);
    this.#hold(this.#drag.thing, this.#drag.anchor);
  }

  /**
   * Two keys may come within one redraw: the places are those after each.
   * @param {Thing} thing
   * @param {Point} anchor
   */
  #hold(thing, anchor) {
    this.#state = this.#told.hold(thing, anchor);
    const { hello, frame, held, taken } = this.#state;
    if (hello && frame) this.#places = new Places(hello, frame, held, taken);
  }

  #drop() {
    const drag = this.#drag;
    this.#drag = null;
    if (!drag || (drag.anchor[0] === drag.from[0] && drag.anchor[1] === drag.from[1])) return;
    this.#told.release();
    this.#told.announce(`${drag.thing.label} at ${place(...drag.anchor)}`);
  }

  #restore() {
    const drag = this.#drag;
    this.#drag = null;
    if (!drag || (drag.anchor[0] === drag.from[0] && drag.anchor[1] === drag.from[1])) return;
    this.#hold(drag.thing, drag.from);
    this.#told.release();
    this.#told.announce(`${drag.thing.label} back at ${place(...drag.from)}`);
  }

  /** @param {Point | null} at @param {boolean} touch */
  #hover(at, touch) {
    const thing = at && !touch ? this.#thingAt(at, touch) : null;
    const held = this.#drag?.thing;
    const key = held?.key ?? thing?.key ?? null;
    set(this.#surface, 'data-over', held ? 'held' : thing ? 'thing' : null);
    if (key !== this.#hovered) {
      this.#hovered = key;
      this.#told.redraw();
    }
    if (!at || !this.#camera) {
      say(this.#readout, '');
      return;
    }
    const shown = held && this.#drag ? this.#drag.anchor : camera.toWorld(this.#camera, at[0], at[1]);
    const label = held?.label ?? thing?.label;
    say(this.#readout, `${label ? `${label} · ` : ''}${place(shown[0], shown[1])}`);
  }

  /** @param {Point} by */
  #nudge(by) {
    const thing = this.#handles.thing;
    if (!thing || !this.#places || !this.#state?.hello) return false;
    if (this.#state.link !== 'live') {
      this.#told.announce('Nothing can be moved while the connection is lost.');
      return true;
    }
    const anchor = nudged(this.#places.anchor(thing), by, this.#state.hello.bounds);
    this.#hold(thing, anchor);
    this.#told.announce(`${thing.label} at ${place(...anchor)}`);
    clearTimeout(this.#keysTimer);
    this.#keysTimer = window.setTimeout(() => this.#restKeys(), KEYS_REST);
    return true;
  }

  #restKeys() {
    if (!this.#keysTimer) return;
    clearTimeout(this.#keysTimer);
    this.#keysTimer = 0;
    this.#told.release();
  }

  /** @param {number} by */
  #choose(by) {
    this.#restKeys();
    if (!this.#handles.choose(by)) return false;
    this.#told.redraw();
    return true;
  }
}
