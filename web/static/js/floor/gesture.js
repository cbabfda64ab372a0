// Gesture: what pointers, the wheel and keys do on the floor. One pointer on a
// thing drags it, on empty floor pans; two pointers pan and zoom; the wheel zooms
// about the pointer. It knows nothing of how things look.

import { nudge } from '../core/drag.js';

/** @typedef {[number, number]} Point */

/**
 * What the floor does with gestures; points are pixels of the floor's view.
 * @typedef {object} Hands
 * @property {(at: Point, touch: boolean) => boolean} take a pointer is down: true when there is a thing to drag
 * @property {(at: Point, snapped: boolean) => void} drag
 * @property {() => void} drop
 * @property {() => void} restore the drag is given up: back to where it was
 * @property {(dx: number, dy: number) => void} pan
 * @property {(at: Point, factor: number) => void} zoom
 * @property {() => void} fit
 * @property {(at: Point | null, touch: boolean) => void} hover
 * @property {(by: Point) => boolean} nudge true when something with the focus was moved
 * @property {(by: number) => boolean} choose the next of several that share a handle
 */

/** How far a key pans, px, and how much it zooms. */
const KEY_PAN = 60;
const KEY_ZOOM = 1.25;

/**
 * @param {SVGSVGElement} surface
 * @param {Hands} hands
 */
export function listen(surface, hands) {
  /** @type {Map<number, Point>} */
  const pointers = new Map();
  let dragging = false;

  /** @param {PointerEvent | WheelEvent} event @returns {Point} */
  const at = (event) => {
    const box = surface.getBoundingClientRect();
    return [event.clientX - box.left, event.clientY - box.top];
  };

  surface.addEventListener('pointerdown', (event) => {
    if (event.button !== 0) return;
    const p = at(event);
    pointers.set(event.pointerId, p);
    surface.setPointerCapture(event.pointerId);
    if (pointers.size === 1) {
      dragging = hands.take(p, event.pointerType === 'touch');
    } else if (dragging) {
      // A second finger while a thing is held: the hand meant to zoom.
      dragging = false;
      hands.restore();
    }
    surface.classList.toggle('panning', !dragging);
  });

  surface.addEventListener('pointermove', (event) => {
    const p = at(event);
    const before = pointers.get(event.pointerId);
    if (!before) {
      if (pointers.size === 0) hands.hover(p, event.pointerType === 'touch');
      return;
    }
    if (dragging) {
      hands.drag(p, event.shiftKey);
    } else if (pointers.size === 1) {
      hands.pan(p[0] - before[0], p[1] - before[1]);
    } else if (pointers.size === 2) {
      const other = [...pointers.entries()].find(([id]) => id !== event.pointerId)?.[1] ?? p;
      const middle = /** @type {Point} */ ([(p[0] + other[0]) / 2, (p[1] + other[1]) / 2]);
      const was = Math.hypot(before[0] - other[0], before[1] - other[1]);
      const is = Math.hypot(p[0] - other[0], p[1] - other[1]);
      hands.pan((p[0] - before[0]) / 2, (p[1] - before[1]) / 2);
      if (was > 0 && is > 0) hands.zoom(middle, is / was);
    }
    pointers.set(event.pointerId, p);
    hands.hover(p, event.pointerType === 'touch');
  });

  /** @param {PointerEvent} event */
  const up = (event) => {
    if (!pointers.delete(event.pointerId)) return;
    if (dragging) {
      dragging = false;
      hands.drop();
    }
    if (pointers.size === 0) surface.classList.remove('panning');
  };
  surface.addEventListener('pointerup', up);
  surface.addEventListener('pointercancel', up);
  surface.addEventListener('pointerleave', () => pointers.size === 0 && hands.hover(null, false));

  surface.addEventListener('wheel', (event) => {
    event.preventDefault();
    // A notch of a wheel is about 100 pixels, 3 lines or a page.
    const unit = event.deltaMode === WheelEvent.DOM_DELTA_PIXEL ? 1 : event.deltaMode === WheelEvent.DOM_DELTA_LINE ? 33 : 400;
    const turned = Math.max(-250, Math.min(250, event.deltaY * unit));
    // A pinch on a touch pad comes as small turns with the control key.
    hands.zoom(at(event), Math.exp(-turned * (event.ctrlKey ? 0.01 : 0.0018)));
  }, { passive: false });

  surface.addEventListener('keydown', (event) => {
    if (dragging && event.key === 'Escape') {
      dragging = false;
      pointers.clear(); // what the pointer does until it is up is nothing
      hands.restore();
      return;
    }
    if (event.ctrlKey || event.metaKey) return;
    if (key(event)) event.preventDefault();
  });

  /** @param {KeyboardEvent} event @returns {boolean} */
  const key = (event) => {
    const box = surface.getBoundingClientRect();
    const middle = /** @type {Point} */ ([box.width / 2, box.height / 2]);
    const by = nudge(event);
    if (by) {
      if (!hands.nudge(by)) hands.pan(-Math.sign(by[0]) * KEY_PAN, Math.sign(by[1]) * KEY_PAN);
      return true;
    }
    switch (event.key) {
      case '+':
      case '=':
        hands.zoom(middle, KEY_ZOOM);
        return true;
      case '-':
      case '_':
        hands.zoom(middle, 1 / KEY_ZOOM);
        return true;
      case '0':
        hands.fit();
        return true;
      case 'PageDown':
        return hands.choose(1);
      case 'PageUp':
        return hands.choose(-1);
      default:
        return false;
    }
  };
}
