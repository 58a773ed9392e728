// Conversion and digits. The inch is 25.4 mm and 0 °C is 32 °F by definition; digits are the project's own
// rule that depth is never shown finer than 0.01 mm.
import assert from 'node:assert/strict';
import { test } from 'node:test';
import { carbonText, depthText, fromDegc, fromMm, numberFrom, plainNumber, temperatureText, toDegc, toMm, windowText } from '../src/units.ts';

test('one inch is 25.4 mm both ways', () => {
  assert.equal(fromMm(25.4, 'inch'), 1);
  assert.equal(toMm(1, 'inch'), 25.4);
  assert.equal(toMm(fromMm(0.87, 'inch'), 'inch').toFixed(9), '0.870000000');
});

test('fixed points of the two temperature scales', () => {
  assert.equal(fromDegc(0, 'degf'), 32);
  assert.equal(fromDegc(100, 'degf'), 212);
  assert.equal(fromDegc(-40, 'degf'), -40);
  assert.equal(toDegc(212, 'degf'), 100);
  assert.equal(temperatureText(930, 'degf'), '1706 °F');
});

test('depth shows hundredths of a millimetre or thousandths of an inch, no finer', () => {
  assert.equal(depthText(0.87449, 'mm'), '0.87 mm');
  assert.equal(depthText(0.87449, 'inch'), '0.034 in');
  assert.equal(windowText([0.9, 1.2], 'mm'), '0.90 – 1.20 mm');
  assert.equal(windowText([0.9, 1.2], 'inch'), '0.035 – 0.047 in');
});

test('nothing known is a dash, never a zero', () => {
  assert.equal(depthText(null, 'mm'), '–');
  assert.equal(temperatureText(null, 'degc'), '–');
  assert.equal(carbonText(null), '–');
});

test('a tiny negative does not read as minus zero', () => {
  assert.equal(depthText(-0.001, 'mm'), '0.00 mm');
});

test('typed numbers take a decimal comma or point and nothing else', () => {
  assert.equal(numberFrom(' 0,9 '), 0.9);
  assert.equal(numberFrom('930'), 930);
  assert.equal(numberFrom('.5'), 0.5);
  assert.equal(numberFrom('1.'), 1);
  for (const wrong of ['', 'abc', '1,2,3', '1e3', '0x10', '9 30', '-', 'Infinity']) assert.equal(numberFrom(wrong), null, wrong);
});

test('a number in a field is as short as it can be', () => {
  assert.equal(plainNumber(930, 1), '930');
  assert.equal(plainNumber(0.1 + 0.2, 3), '0.3');
});
