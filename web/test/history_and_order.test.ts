import assert from 'node:assert/strict';
import { test } from 'node:test';
import { ArrivalOrder } from '../src/arrival_order.ts';
import { msSince } from '../src/elapsed.ts';
import { extent, nearRecipe, recipeSteps, stretchesOf } from '../src/pictures/history_series.ts';
import { routeOf } from '../src/routes.ts';

test('stretches join neighbours of one basis and reach to the next point', () => {
  assert.deepEqual(stretchesOf([0, 60, 120, 180, 240], ['measured', 'held', 'held', 'planned', 'measured']),
    [{ from_s: 60, to_s: 180, basis: 'held' }, { from_s: 180, to_s: 240, basis: 'planned' }]);
  assert.deepEqual(stretchesOf([0, 60], ['measured', 'measured']), []);
});

test('the recipe becomes steps end to end from the start of the load', () => {
  const steps = recipeSteps({ name: 'r', segments: [{ name: 'boost', duration_min: 2, temperature_degc: 930, carbon_potential_wt_pct: 1.1 }, { name: 'diffuse', duration_min: 1, temperature_degc: 900, carbon_potential_wt_pct: 0.8 }] }, 1000);
  assert.deepEqual(steps.map(({ from_s, to_s }) => [from_s, to_s]), [[1000, 1120], [1120, 1180]]);
});

test('scales hold every value and survive having none', () => {
  const [low, high] = extent([1, null, 3], 0);
  assert.ok(low < 1 && high > 3);
  assert.deepEqual(extent([null], 5), [0, 5]);
  const [from, to] = nearRecipe([20, 500, 948], [{ value: 930 }, { value: 850 }], 100);
  assert.equal(from, 750);
  assert.ok(to >= 948);
});

test('an older Floor never replaces a newer one', () => {
  const order = new ArrivalOrder();
  assert.ok(order.accepts({ sequence: 10, now: '2026-03-02T06:00:10Z' }));
  assert.ok(!order.accepts({ sequence: 9, now: '2026-03-02T06:00:09Z' }));
  assert.ok(order.accepts({ sequence: 11, now: '2026-03-02T06:00:11Z' }));
});

test('a restarted daemon counts again from one', () => {
  const order = new ArrivalOrder();
  assert.ok(order.accepts({ sequence: 900, now: '2026-03-02T06:00:10Z' }));
  assert.ok(order.accepts({ sequence: 1, now: '2026-03-02T06:00:20Z' }), 'its clock has moved on');
  const back = new ArrivalOrder();
  back.accepts({ sequence: 900, now: '2026-03-02T06:00:10Z' });
  const answers = [1, 2, 3].map((sequence) => back.accepts({ sequence, now: `2026-03-02T05:00:0${sequence}Z` }));
  assert.deepEqual(answers, [false, false, true], 'even with a clock set back');
  back.forget();
  assert.ok(back.accepts({ sequence: 1, now: '2026-03-02T04:00:00Z' }));
});

test('elapsed time is the longer of the two clocks and never negative', () => {
  const then = { steadyMs: 1000, wallMs: 50_000 };
  assert.equal(msSince(then, { steadyMs: 3000, wallMs: 51_000 }), 2000);
  assert.equal(msSince(then, { steadyMs: 1100, wallMs: 3_650_000 }), 3_600_000, 'a tablet that slept');
  assert.equal(msSince(then, { steadyMs: 1000, wallMs: 10 }), 0, 'a wall clock set back');
});

test('addresses', () => {
  assert.deepEqual(routeOf('#/load/7'), { page: 'load', id: 7 });
  assert.deepEqual(routeOf('#/start?furnace=pit-2'), { page: 'start', furnace: 'pit-2' });
  assert.deepEqual(routeOf('#/loads'), { page: 'loads' });
  for (const floor of ['', '#/', '#/load/x', '#/nowhere']) assert.deepEqual(routeOf(floor), { page: 'floor' });
});
