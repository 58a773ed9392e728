import assert from 'node:assert/strict';
import { test } from 'node:test';
import { type Marked, judgedDepthMm, marksOf, reachText } from '../src/marks.ts';

const fine: Marked = {
  condition: 'live', message: null, dataAgeS: 20,
  inputs: { temperature: { value_degc: 928, basis: 'measured', age_s: 20 }, carbon_potential: { value_wt_pct: 1.1, basis: 'measured', age_s: 20 } },
  segment: { index: 1, name: 'boost', elapsed_min: 10, minutes_left: 50, overdue: false },
  item: { case_depth_mm: 0.5, case_depth_window_mm: [0.9, 1.2] },
};
const shapes = (on: Marked) => marksOf(on).map((mark) => mark.shape);

test('a measured load on plan has nothing to say', () => assert.deepEqual(shapes(fine), []));

test('every guessed input is named', () => {
  const held = { ...fine, inputs: { ...fine.inputs, carbon_potential: { ...fine.inputs.carbon_potential, basis: 'held' as const } } };
  assert.equal(marksOf(held)[0]?.word, 'held: carbon potential');
  const both: Marked = { ...fine, inputs: { temperature: { ...fine.inputs.temperature, basis: 'planned' }, carbon_potential: { ...fine.inputs.carbon_potential, basis: 'planned' } } };
  assert.equal(marksOf(both)[0]?.word, 'planned inputs');
  const mixed: Marked = { ...both, inputs: { ...both.inputs, carbon_potential: { ...fine.inputs.carbon_potential, basis: 'held' } } };
  assert.deepEqual(shapes(mixed), ['planned', 'held']);
});

test('old data comes first and the daemon’s sentence is said once', () => {
  const stale: Marked = { ...fine, condition: 'stale', message: 'Logger silent.', inputs: { ...fine.inputs, temperature: { ...fine.inputs.temperature, basis: 'held' } } };
  assert.deepEqual(shapes(stale), ['stale', 'held']);
  assert.equal(marksOf(stale).filter((mark) => mark.sentence === 'Logger silent.').length, 1);
});

test('a depth beyond the window is marked, one inside it is not', () => {
  assert.deepEqual(shapes({ ...fine, item: { case_depth_mm: 1.21, case_depth_window_mm: [0.9, 1.2] } }), ['past window']);
  assert.deepEqual(shapes({ ...fine, item: { case_depth_mm: 1.2, case_depth_window_mm: [0.9, 1.2] } }), []);
});

test('a segment over its time and a calculation that cannot be relied on', () => {
  assert.deepEqual(shapes({ ...fine, segment: { ...fine.segment!, minutes_left: -12, overdue: true } }), ['overdue']);
  assert.deepEqual(shapes({ ...fine, item: { ...fine.item!, outcome: 'outside range' } }), ['outside range']);
});

test('reach is plain arithmetic and never rounds a shortfall to nothing', () => {
  const window = [0.9, 1.2] as [number, number];
  assert.equal(reachText({ case_depth_mm: 0.87, case_depth_window_mm: window }, 'mm'), '0.03 mm to go');
  assert.equal(reachText({ case_depth_mm: 0.8999, case_depth_window_mm: window }, 'mm'), '0.01 mm to go');
  assert.equal(reachText({ case_depth_mm: 0.8999, case_depth_window_mm: window }, 'inch'), '0.001 in to go');
  assert.equal(reachText({ case_depth_mm: 0.9, case_depth_window_mm: window }, 'mm'), 'in the window');
  assert.equal(reachText({ case_depth_mm: 1.25, case_depth_window_mm: window }, 'mm'), '0.05 mm too deep');
  assert.equal(reachText({ case_depth_mm: null, case_depth_window_mm: window }, 'mm'), 'no case yet');
  assert.equal(reachText({ case_depth_mm: 0.8, case_depth_window_mm: window }, 'mm', true), '0.10 mm short', 'an ended load goes no further');
});

test('the window is for the finished part where something is ground off', () => {
  const ground = { case_depth_mm: 1.3, finished_case_depth_mm: 1.15, grinding_stock_mm: 0.15, case_depth_window_mm: [0.9, 1.2] as [number, number] };
  assert.equal(judgedDepthMm(ground), 1.15);
  assert.equal(reachText(ground, 'mm'), 'in the window');
  assert.deepEqual(shapes({ ...fine, item: ground }), []);
  assert.equal(judgedDepthMm({ ...ground, grinding_stock_mm: 0 }), 1.3);
  assert.equal(judgedDepthMm({ ...ground, finished_case_depth_mm: null }), null, 'ground away altogether');
});

test('doubt, disagreement, a marked stretch and a segment that runs long are each said', () => {
  const carbon = { ...fine.inputs.carbon_potential, disagree: true, disagreement_wt_pct: 0.12 };
  assert.equal(marksOf({ ...fine, inputs: { ...fine.inputs, carbon_potential: carbon } })[0]?.sentence, 'By 0.12 % C. Check probe and gas analysis.');
  const doubt = marksOf({ ...fine, segment: { ...fine.segment!, doubt: 'Unsure where the recipe is: the readings fit two segments.' } })[0];
  assert.deepEqual([doubt?.word, doubt?.sentence], ['unsure where the recipe is', 'The readings fit two segments.']);
  assert.deepEqual(shapes({ ...fine, inputs: { ...fine.inputs, temperature: { ...fine.inputs.temperature, basis: 'masked' } } }), ['masked']);
  assert.equal(marksOf({ ...fine, segment: { ...fine.segment!, long_by_min: 14 } })[0]?.sentence, 'boost by 14 min. Correct the recipe if that is meant.');
  assert.deepEqual(shapes({ ...fine, segment: { ...fine.segment!, long_by_min: 0 } }), []);
});
