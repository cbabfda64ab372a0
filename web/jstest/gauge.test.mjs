import assert from 'node:assert/strict';
import { test } from 'node:test';
import { groups, places } from '../static/js/core/gauge.js';

const modes = [{ name: 'goal-seeking', look: 'goal' }, { name: 'wall-following', look: 'wall' }, { name: 'arrived', look: 'done' }, { name: 'avoidance', look: 'avoid' }];
const gauge = (label, change = {}) => ({ label, text: `${label} text`, met: false, share: 0.2, mark: 0.4, release: 0.4, ...change });
const exit = (to, gauges, change = {}) => ({ to, name: modes[to].name, hold: 0, held: 0, gauges, ...change });

test('exits to one mode share what they have in common', () => {
  const [g, ...others] = groups([
    exit(0, [gauge('time'), gauge('free'), gauge('room')], { hold: 0.1, held: 0 }),
    exit(0, [gauge('time'), gauge('gain'), gauge('room')], { hold: 0.1, held: 0.04 }),
  ], modes);
  assert.equal(others.length, 0);
  assert.deepEqual([g.when, g.all.map((x) => x.label), g.one.map((x) => x.label)], ['when all hold', ['time', 'room'], ['free', 'gain']]);
  assert.deepEqual([g.hold, g.held], [0.1, 0.04]);
});

test('exits that differ in more stay apart', () => {
  const all = groups([exit(0, [gauge('a'), gauge('b')]), exit(0, [gauge('c')])], modes);
  assert.deepEqual(all.map((g) => [g.when, g.all.map((x) => x.label)]), [['when all hold', ['a', 'b']], ['when', ['c']]]);
});

test('two thresholds of one reading are two gauges of which one must hold', () => {
  const [g] = groups([exit(2, [gauge('way', { text: '1 < 0.1' })]), exit(2, [gauge('way', { text: '1 < 0.2' })])], modes);
  assert.deepEqual([g.when, g.all.length, g.one.length], ['when one holds', 0, 2]);
});

test('endings come last, and the most conditions first', () => {
  const all = groups([exit(2, [gauge('way')]), exit(3, [gauge('near')]), exit(0, [gauge('a'), gauge('b')])], modes);
  assert.deepEqual(all.map((g) => g.name), ['goal-seeking', 'avoidance', 'arrived']);
  assert.deepEqual(groups([], modes), []);
});

test('a gauge has its parts on the scale, and the band between threshold and release', () => {
  assert.deepEqual(places(gauge('x', { share: 0.75, mark: 0.4, release: 0.35 })), { fill: 75, mark: 40, band: 35, width: 5 });
  assert.deepEqual(places(gauge('x', { share: 2, mark: 0.4, release: 0.5 })), { fill: 100, mark: 40, band: 40, width: 10 });
  assert.deepEqual(places(gauge('x', { share: -1 })), { fill: 0, mark: 40, band: 40, width: 0 });
});
