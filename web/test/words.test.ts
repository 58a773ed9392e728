import assert from 'node:assert/strict';
import { test } from 'node:test';
import { ageText, localInput, minutesText, momentText, utcFromLocalInput, utcText } from '../src/words.ts';

test('minutes in words', () => {
  assert.equal(minutesText(0), '0 min');
  assert.equal(minutesText(59.4), '59 min');
  assert.equal(minutesText(59.6), '1 h');
  assert.equal(minutesText(72), '1 h 12 min');
  assert.equal(minutesText(248), '4 h 08 min');
  assert.equal(minutesText(-3), '0 min');
});

test('age never rounds up to look fresher or older than it is by a whole unit', () => {
  assert.equal(ageText(20.9), '20 s');
  assert.equal(ageText(119.9), '119 s');
  assert.equal(ageText(120), '2 min');
  assert.equal(ageText(3599), '59 min');
  assert.equal(ageText(5400), '1 h 30 min');
});

test('a moment of another day carries its day', () => {
  const now = new Date(2026, 2, 2, 14, 32).getTime();
  assert.equal(momentText(now, now), '14:32');
  assert.equal(momentText(now - 86_400_000, now), '2026-03-01 14:32');
});

test('a time field and UTC lead back to each other', () => {
  const ms = Date.UTC(2026, 2, 2, 6, 5, 0);
  assert.equal(utcText(ms), '2026-03-02T06:05:00Z');
  assert.equal(utcFromLocalInput(localInput(ms)), '2026-03-02T06:05:00Z');
  assert.equal(utcFromLocalInput(''), null);
});
