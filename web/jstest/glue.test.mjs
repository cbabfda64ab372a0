import assert from 'node:assert/strict';
import { test } from 'node:test';
import { glue } from '../static/js/core/glue.js';

const shown = (parts) => glue(parts).map(({ part, tail }) => (part.text ?? `<${part.number ?? part.choice}>`) + tail);

test('punctuation stays with the field before it', () => {
  assert.deepEqual(
    shown([{ text: 'A robot, ' }, { number: 'a' }, { text: ', sees ' }, { choice: 'b' }, { text: '.) And ' }, { number: 'c' }, { text: '.' }]),
    ['A robot, ', '<a>,', ' sees ', '<b>.)', ' And ', '<c>.', ''],
  );
});

test('nothing else is moved', () => {
  assert.deepEqual(shown([{ number: 'a' }, { text: ' apart, ' }, { number: 'b' }, { number: 'c' }]), ['<a>', ' apart, ', '<b>', '<c>']);
  assert.deepEqual(shown([{ text: ', first' }, { text: ', second' }]), [', first', ', second']);
  assert.deepEqual(shown([]), []);
});
