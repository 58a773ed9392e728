// The strip must not lie: darker is more carbon everywhere, the window is always in the picture, and the
// words for the screen reader carry the same figures.
import assert from 'node:assert/strict';
import { test } from 'node:test';
import { type StripItem, axisEndMm, carbonAt, clampLabel, stripText, ticksOf, toneOf, toneStops } from '../src/pictures/strip_geometry.ts';

const item: StripItem = { depth_mm: [0, 0.5, 1, 2, 4], carbon_wt_pct: [0.8, 0.6, 0.4, 0.2, 0.2], case_depth_mm: 0.87, window_mm: [0.9, 1.2], turnover_mm: 0.3 };
const light = (tone: string) => Number.parseInt(tone.slice(1, 3), 16) + Number.parseInt(tone.slice(3, 5), 16) + Number.parseInt(tone.slice(5, 7), 16);

test('more carbon is never lighter', () => {
  for (let c = 0; c < 1.5; c += 0.01) assert.ok(light(toneOf(c + 0.01)) <= light(toneOf(c)), `at ${c}`);
  assert.ok(light(toneOf(0.8)) < light(toneOf(0.2)) - 150);
});

test('the axis holds window and depth and ends on a round figure', () => {
  assert.equal(axisEndMm(item), 2);
  assert.equal(axisEndMm({ ...item, case_depth_mm: 1.9 }), 2.5);
  assert.equal(axisEndMm({ ...item, case_depth_mm: null }), 2);
});

test('a thin part ends at its centre, but the window stays in the picture', () => {
  const thin = { ...item, depth_mm: [0, 0.5, 1], carbon_wt_pct: [0.8, 0.6, 0.5] };
  assert.ok(axisEndMm(thin) >= 1.2 && axisEndMm(thin) < 2);
  assert.ok(axisEndMm({ ...thin, window_mm: [0.3, 0.5], case_depth_mm: 0.4 }) <= 1);
});

test('ticks start at zero, stay inside and carry labels in the unit shown', () => {
  for (const unit of ['mm', 'inch'] as const) {
    const ticks = ticksOf(2, unit, 600);
    assert.equal(ticks[0]?.mm, 0);
    assert.ok(ticks.every((tick) => tick.mm <= 2 + 1e-9));
    assert.ok(ticks.filter((tick) => tick.label).length >= 3);
  }
  assert.ok(ticksOf(2, 'mm', 600).some((tick) => tick.label === '1.0' && tick.mm === 1));
});

test('tone stops cover the axis and end on the interpolated carbon', () => {
  const stops = toneStops(item, 1.5);
  assert.equal(stops[0]?.offset, 0);
  assert.equal(stops[stops.length - 1]?.offset, 1);
  assert.equal(stops[stops.length - 1]?.tone, toneOf(0.3));
  const long = { ...item, depth_mm: Array.from({ length: 500 }, (_, i) => i / 250), carbon_wt_pct: Array.from({ length: 500 }, (_, i) => 1 - i / 600) };
  assert.ok(toneStops(long, 2).length < 120);
});

test('carbon between two points lies on the line between them', () => {
  assert.equal(carbonAt(item, 0), 0.8);
  assert.equal(carbonAt(item, 0.25)?.toFixed(3), '0.700');
  assert.equal(carbonAt(item, 9), 0.2);
  assert.equal(carbonAt({ ...item, depth_mm: [], carbon_wt_pct: [] }, 1), null);
});

test('the text alternative carries the figures and says when inputs are guessed', () => {
  const text = stripText(item, 'mm', true);
  for (const part of ['0.87 mm', '0.90 to 1.20 mm', 'not measured', '0.80 % at the surface', 'Turnover at 0.30 mm']) assert.ok(text.includes(part), part);
  assert.ok(!stripText(item, 'mm', false).includes('not measured'));
  assert.ok(stripText({ ...item, case_depth_mm: null }, 'mm', false).includes('No case yet'));
});

test('a label keeps inside its edges', () => {
  assert.equal(clampLabel(5, 40, 0, 200), 20);
  assert.equal(clampLabel(199, 40, 0, 200), 180);
  assert.equal(clampLabel(100, 40, 0, 200), 100);
});

test('what is ground off moves the window inward, and the words say so', () => {
  const ground = { ...item, stock_mm: 0.2 };
  assert.equal(axisEndMm({ ...ground, window_mm: [0.9, 1.3] }), 2.5);
  assert.ok(stripText(ground, 'mm', false).includes('0.20 mm are ground off before that is measured.'));
  assert.ok(!stripText(item, 'mm', false).includes('ground off'));
});
