import assert from 'node:assert/strict';
import { test } from 'node:test';
import { bunches, kindOf, leadsTo, nextTo, wordsOf } from '../static/js/core/marks.js';

const mark = (kind, tick, text = `${kind} at ${tick}`) => ({ kind, who: 0, tick, text });

test('marks that would touch lie in one bunch; ends have badges of their own', () => {
  const all = bunches([mark('parting', 30), mark('chatter', 10), mark('end', 10), mark('contact', 12), mark('contact', 900)], (t) => t, 500, 10);
  assert.deepEqual(all.map((b) => [b.x, b.marks.map((m) => m.tick)]), [[10, [10, 12]], [30, [30]]]);
});

test('thousands of marks are no more bunches than have room', () => {
  const all = bunches(Array.from({ length: 2000 }, (_, i) => mark('contact', i)), (t) => t / 4, 500, 18);
  assert.ok(all.length <= 500 / 18 + 1);
  assert.equal(all.reduce((n, b) => n + b.marks.length, 0), 2000);
});

test('a bunch is as grave as its gravest, says all of it, and leads through it', () => {
  const [b] = bunches([mark('chatter', 10), mark('contact', 12), mark('parting', 14)], (t) => t, 500, 10);
  assert.equal(kindOf(b), 'contact');
  assert.equal(wordsOf(b), 'chatter at 10\ncontact at 12\nparting at 14');
  assert.deepEqual([0, 10, 12, 14, 99].map((now) => leadsTo(b, now)), [10, 12, 14, 10, 10]);
  const [many] = bunches(Array.from({ length: 9 }, (_, i) => mark('contact', i)), (t) => t, 500, 99);
  assert.match(wordsOf(many), /and 5 more here$/);
});

test('keys go from mark to mark', () => {
  const all = [mark('contact', 10), mark('parting', 30), mark('end', 50)];
  assert.deepEqual([nextTo(all, 0, 1), nextTo(all, 10, 1), nextTo(all, 50, 1)], [10, 30, null]);
  assert.deepEqual([nextTo(all, 50, -1), nextTo(all, 10, -1)], [30, null]);
});
