import assert from 'node:assert/strict';
import { test } from 'node:test';
import { spoken, verdict } from '../static/js/core/verdict.js';
import { frame } from './kit.mjs';

const asked = { within_s: 90, leeway_m: 0.1, switches: 10 };
const of = (change, what = asked) => verdict(frame(change), what);
const plain = (s) => s.replaceAll('\u00a0', ' ');

test('a run that scrapes too close falls short at once', () => {
  const v = of({ leeway: 0.047 });
  assert.equal(plain(v.leeway), '0.05 m');
  assert.equal(plain(v.words), 'of leeway, where 0.10 m is asked. This run falls short.');
  assert.equal(v.mark, 'bad');
});

test('a run that keeps what is asked says so, so far and at its end', () => {
  assert.match(of({ leeway: 0.2 }).words, /So far it holds/);
  const v = of({ leeway: 0.2, status: 'arrived', reason: 'It stood at the goal.' });
  assert.match(v.words, /This run keeps what is asked/);
  assert.deepEqual([v.mark, v.status, v.tone, v.reason], ['good', 'arrived', 'done', 'It stood at the goal.']);
});

test('late, restless or not there is short too', () => {
  const done = { leeway: 0.2, status: 'arrived' };
  const short = (change) => /falls short/.test(of({ ...done, ...change }).words);
  assert.equal(short({}), false);
  assert.equal(short({ time: 90.1 }), true);
  assert.equal(short({ switches: 11 }), true);
  for (const status of ['timed out', 'struck', 'gave up', 'missed', 'diverged']) assert.equal(short({ status }), true, status);
});

test('rows carry what is asked, and what breaks it is marked', () => {
  const rows = Object.fromEntries(of({ time: 95, switches: 10, contacts: 1 }).rows.map((r) => [r.key, r]));
  assert.deepEqual([plain(rows.time.asked), rows.time.bad], ['90 s', true]);
  assert.deepEqual([rows.switches.asked, rows.switches.bad], ['10', false]);
  assert.equal(rows.contacts.bad, true);
  assert.equal(rows.way.asked, '');
});

test('nothing asked, nothing near: no judgement on the leeway', () => {
  const v = verdict(frame({ leeway: 0.01 }), {});
  assert.equal(v.mark, 'none');
  assert.equal(v.words, 'of leeway. So far it holds.');
  assert.equal(of({ leeway: null }).mark, 'none');
  assert.equal(of({ leeway: null }).leeway, '–');
  assert.ok(verdict(frame(), {}).rows.every((r) => r.asked === ''));
});

test('the end of a run is read out', () => {
  assert.equal(spoken(frame(), asked), '');
  const words = spoken(frame({ status: 'gave up', time: 61, leeway: 0.2, reason: 'The goal is walled in.' }), asked);
  assert.match(words, /^The run ended at 1:01\.0: gave up\. The goal is walled in\. 0\.20 m of leeway/);
});
