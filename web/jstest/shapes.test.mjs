import assert from 'node:assert/strict';
import { test } from 'node:test';
import { moverOutline, outline, route, standing } from '../static/js/core/shapes.js';
import { hello } from './kit.mjs';

const { solids, movers } = hello();

test('outlines: a wall is open, a polygon closed, a disc two arcs', () => {
  assert.equal(outline(solids[0]), 'M2 2L2 5L4 5');
  assert.match(outline(solids[1]), /^M6 1L8 1.*Z$/);
  assert.equal(outline(solids[2]), 'M8.5 4A0.5 0.5 0 1 0 9.5 4A0.5 0.5 0 1 0 8.5 4Z');
});

test('all that stands is two paths, without what is drawn by itself', () => {
  const all = standing(solids, () => false);
  assert.equal(all.walls, 'M2 2L2 5L4 5M0 0L12 0');
  assert.equal(all.fills.match(/M/g)?.length, 2);
  assert.equal(standing(solids, (i) => i === 0).walls, 'M0 0L12 0');
});

test('movers: a box is turned by its heading, a route back and forth stays open', () => {
  assert.equal(moverOutline(movers[0]), 'M-0.2 0.5L-0.2 -0.5L0.2 -0.5L0.2 0.5Z');
  assert.equal(route(movers[0]), 'M3 7L9 7');
  assert.equal(route({ ...movers[0], loop: true }), 'M3 7L9 7Z');
  assert.equal(route(movers[1]), '');
});
