import assert from 'node:assert/strict';
import { test } from 'node:test';
import { wait } from '../static/js/core/backoff.js';
import { dataOf, liveAddress, longText, sessionOf } from '../static/js/core/link.js';

test('the data of what is pasted', () => {
  const data = 'eJyrVkpKLC4-_w09AZ';
  assert.equal(dataOf(`http://127.0.0.1:8080/open#${data}`), data);
  assert.equal(dataOf(`#${data}`), data);
  assert.equal(dataOf(`  ${data}\n`), data);
  assert.equal(dataOf(`<http://host/open#${data}>`), data);
  assert.equal(dataOf('http://host/open#eJyrVkpK\n LC4-_w09AZ'), data); // wrapped by a mail tool
  for (const s of ['', '#', 'http://host/open', 'http://host/open#', 'http://host/open#with%20percent', 'short', 'a{b}c[d]e=f']) {
    assert.equal(dataOf(s), null, s);
  }
});

test('sessions and addresses', () => {
  assert.equal(sessionOf('/bench/k3f'), 'k3f');
  assert.equal(sessionOf('/bench/'), null);
  assert.equal(sessionOf('/bench/a/b'), null);
  assert.equal(liveAddress('k3f', { protocol: 'http:', host: 'localhost:80' }), 'ws://localhost:80/live/k3f');
  assert.equal(liveAddress('k3f', { protocol: 'https:', host: 'h' }), 'wss://h/live/k3f');
  assert.match(longText(12345), /12,345 characters/);
});

test('waits grow from half a second to a quarter of a minute, never to nothing', () => {
  const waits = Array.from({ length: 40 }, (_, i) => wait(i, 0));
  assert.equal(waits[0], 0.5);
  assert.equal(waits[1], 1);
  assert.equal(waits.at(-1), 15);
  for (let i = 1; i < waits.length; i++) assert.ok(waits[i] >= waits[i - 1]);
  for (const chance of [0, 0.3, 0.999]) assert.ok(wait(0, chance) > 0.37 && wait(0, chance) <= 0.5);
});
