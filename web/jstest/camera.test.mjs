import assert from 'node:assert/strict';
import { test } from 'node:test';
import * as camera from '../static/js/core/camera.js';

/** @type {[number, number, number, number]} */
const bounds = [0, 0, 12, 8];
const near = (a, b, tolerance = 1e-9) => assert.ok(Math.abs(a - b) <= tolerance, `${a} is not ${b}`);

test('a fitted camera shows every corner of the floor, y up, with room below for the scale', () => {
  for (const [w, h] of [[876, 584], [390, 300], [2560, 1400], [300, 900]]) {
    const c = camera.fit(bounds, w, h);
    const [left, bottom] = camera.toScreen(c, 0, 0);
    const [right, top] = camera.toScreen(c, 12, 8);
    assert.ok(left >= 0 && right <= w && top >= 0 && bottom <= h);
    assert.ok(top < bottom);
    near(left + right, w, 1e-6);
    near(top + 14 + bottom, h, 1e-6);
  }
});

test('screen and world are inverse to one another', () => {
  const c = { x: 3.2, y: 1.7, scale: 91.5, width: 801, height: 533 };
  for (const [x, y] of [[0, 0], [3.2, 1.7], [-4, 11], [0.001, 1000]]) {
    const [wx, wy] = camera.toWorld(c, ...camera.toScreen(c, x, y));
    near(wx, x);
    near(wy, y);
  }
});

test('zooming keeps the point under the pointer', () => {
  let c = camera.fit(bounds, 900, 600);
  for (const factor of [1.3, 2, 0.8, 5]) {
    const before = camera.toWorld(c, 300, 200);
    c = camera.zoomAbout(c, bounds, 300, 200, factor);
    const after = camera.toWorld(c, 300, 200);
    near(after[0], before[0], 1e-9);
    near(after[1], before[1], 1e-9);
  }
});

test('zooming has limits, and the floor cannot be lost', () => {
  const fitted = camera.fit(bounds, 900, 600);
  near(camera.zoomAbout(fitted, bounds, 450, 300, 1e-9).scale, fitted.scale / 2);
  assert.equal(camera.zoomAbout(fitted, bounds, 450, 300, 1e9).scale, 2000);
  const gone = camera.pan(fitted, bounds, 1e6, -1e6);
  assert.deepEqual([gone.x, gone.y], [0, 0]);
});

test('panning moves the picture with the pointer', () => {
  const c = camera.fit(bounds, 900, 600);
  const [x, y] = camera.toScreen(camera.pan(c, bounds, 25, -40), 5, 5);
  const [x0, y0] = camera.toScreen(c, 5, 5);
  near(x - x0, 25, 1e-6);
  near(y - y0, -40, 1e-6);
});

test('another size of the view: fitted stays fitted, a close look stays where it is', () => {
  const fitted = camera.fit(bounds, 900, 600);
  assert.deepEqual(camera.resize(fitted, bounds, 500, 700), camera.fit(bounds, 500, 700));
  const close = camera.zoomAbout(fitted, bounds, 100, 100, 4);
  assert.equal(camera.isFitted(close, bounds), false);
  const resized = camera.resize(close, bounds, 500, 700);
  assert.deepEqual([resized.x, resized.y, resized.scale], [close.x, close.y, close.scale]);
});

test('the matrix does what toScreen does', () => {
  const c = { x: 2, y: 3, scale: 50, width: 400, height: 300 };
  const [a, b, cc, d, e, f] = camera.matrix(c).slice(7, -1).split(' ').map(Number);
  const [sx, sy] = camera.toScreen(c, 4.2, 1.1);
  near(a * 4.2 + cc * 1.1 + e, sx, 1e-6);
  near(b * 4.2 + d * 1.1 + f, sy, 1e-6);
});

test('grid and scale bar have 1, 2, 5 lengths that are long enough', () => {
  for (let scale = 0.5; scale < 3000; scale *= 1.17) {
    const length = camera.niceLength(scale, 42);
    const px = length * scale;
    assert.ok(px >= 42 * (1 - 1e-9) && px < 42 * 2.5001, `${px} px at ${scale}`);
    const mantissa = length / 10 ** Math.floor(Math.log10(length) + 1e-9);
    assert.ok([1, 2, 5].some((k) => Math.abs(k - mantissa) < 1e-6), `${length}`);
  }
});
