import assert from 'node:assert/strict';
import { test } from 'node:test';
import { clamp, format, parse, problem, rangeText, scrub, step } from '../static/js/core/entry.js';

const radius = { min: 0.05, max: 1, step: 0.01, decimals: 2, unit: 'm' };
const beams = { min: 1, max: 720, step: 1, decimals: 0, unit: 'beams' };

test('what a person types', () => {
  assert.equal(parse('0.21'), 0.21);
  assert.equal(parse(' 0,21 '), 0.21);
  assert.equal(parse('.5'), 0.5);
  assert.equal(parse('5.'), 5);
  assert.equal(parse('−3'), -3);
  assert.equal(parse('+1e-3'), 0.001);
  assert.equal(parse('0.21 m', 'm'), 0.21);
  assert.equal(parse('0.45\u2009M/S', 'm/s'), 0.45);
});

test('what is not a number', () => {
  for (const s of ['', ' ', 'abc', '1.2.3', '1,2,3', '1,000.5', '0x10', '--1', '1e', '1e999', 'Infinity', 'NaN', '0.2 km', '2 m']) {
    assert.equal(parse(s), null, s);
  }
});

test('values as text: the usual decimals, more only where they carry something', () => {
  assert.equal(format(0.3, radius), '0.30');
  assert.equal(format(0.2125, radius), '0.2125');
  assert.equal(format(0.1 + 0.2, radius), '0.30');
  assert.equal(format(24, beams), '24');
  assert.equal(format(-0, radius), '0.00');
  assert.equal(format(1e-9, radius), '0.00');
});

test('text and value are inverse to one another', () => {
  for (const v of [0.05, 0.21, 1, 0.123456, 0.5]) assert.equal(parse(format(v, radius)), v);
});

test('what is wrong is said in words, with the range', () => {
  assert.equal(problem(0.05, radius), null);
  assert.equal(problem(1, radius), null);
  assert.equal(problem(1.01, radius), 'Out of range: it can be 0.05 to 1.00\u00a0m.');
  assert.match(problem(null, radius) ?? '', /not a number.*0\.05 to 1\.00/);
  assert.match(problem(2.5, beams) ?? '', /whole number/);
  assert.equal(rangeText(beams), '1 to 720\u00a0beams');
});

test('steps add up without what binary fractions leave behind, and stop at the range', () => {
  let v = 0.05;
  for (let i = 0; i < 25; i++) v = step(v, 1, radius);
  assert.equal(v, 0.3);
  assert.equal(step(0.95, 10, radius), 1);
  assert.equal(step(0.06, -10, radius), 0.05);
  assert.equal(step(0.2125, 1, radius), 0.2225);
  assert.equal(clamp(7, radius), 1);
});

test('a drag sideways: a step every few pixels, ten with Shift, back to where it began', () => {
  assert.equal(scrub(0.21, 0, false, radius), 0.21);
  assert.equal(scrub(0.21, 4, false, radius), 0.21);
  assert.equal(scrub(0.21, 50, false, radius), 0.31);
  assert.equal(scrub(0.21, -50, false, radius), 0.11);
  assert.equal(scrub(0.21, 50, true, radius), 1);
  assert.equal(scrub(24, -5000, false, beams), 1);
});
