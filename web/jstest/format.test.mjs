import assert from 'node:assert/strict';
import { test } from 'node:test';
import { clock, count, fixed, metres, numbersIn, percent, place, seconds, speed } from '../static/js/core/format.js';

test('times', () => {
  assert.equal(clock(0), '0:00.0');
  assert.equal(clock(33.44), '0:33.4');
  assert.equal(clock(59.94), '0:59.9');
  assert.equal(clock(59.96), '1:00.0');
  assert.equal(clock(60), '1:00.0');
  assert.equal(clock(605.21), '10:05.2');
  assert.equal(clock(0.1 + 0.2), '0:00.3');
  assert.equal(clock(0.3 - 1e-16), '0:00.3');
  assert.equal(clock(28.7, 0), '0:29');
  assert.equal(clock(null), '–');
  assert.equal(clock(NaN), '–');
  assert.equal(seconds(60.44), '60.4\u00a0s');
});

test('lengths, shares and counts', () => {
  assert.equal(metres(0.047), '0.05\u00a0m');
  assert.equal(metres(-0.012), '−0.01\u00a0m');
  assert.equal(metres(-0.001), '0.00\u00a0m');
  assert.equal(metres(undefined), '–');
  assert.equal(metres(Infinity), '–');
  assert.equal(percent(0.114), '11\u00a0%');
  assert.equal(percent(0), '0\u00a0%');
  assert.equal(percent(0.001), '<\u00a01\u00a0%');
  assert.equal(percent(1), '100\u00a0%');
  assert.equal(count(12345), '12,345');
  assert.equal(count(30), '30');
  assert.equal(fixed(-0.04, 1), '0.0');
  assert.equal(place(9.1, -2), '9.10, −2.00\u00a0m');
});

test('speeds', () => {
  assert.deepEqual([0.25, 0.5, 1, 64, 0].map(speed), ['×¼', '×½', '×1', '×64', 'as fast as it goes']);
});

test('numbers in a sentence, with their units', () => {
  const numbers = (s) => numbersIn(s).filter((p) => p.number).map((p) => p.text);
  assert.deepEqual(numbers('something stood 0.47 m away, nearer than 0.50 m.'), ['0.47\u00a0m', '0.50\u00a0m']);
  assert.deepEqual(numbers('Since 0:29.6, because 3.8 s have passed at 0.45 m/s'), ['0:29.6', '3.8\u00a0s', '0.45\u00a0m/s']);
  assert.deepEqual(numbers('turned by −12.5° and 11 % more'), ['−12.5°', '11\u00a0%']);
  assert.deepEqual(numbers('wall w12 in room B2 has 3 meters'), ['3']);
  assert.deepEqual(numbers('no number'), []);
});

test('the pieces of a sentence are the sentence', () => {
  for (const s of ['', '5', 'a 0.3 m b', '0.3 m0.4 m', 'x1 and 2: 3:04.5!']) {
    assert.equal(numbersIn(s).map((p) => p.text).join('').replaceAll('\u00a0', ' '), s);
  }
});
