import assert from 'node:assert/strict';
import { test } from 'node:test';
import { alertsOnFloor, calling, countWords, heard, silenceKey, worstOf } from '../src/alert_words.ts';
import type { Floor, History } from '../src/contract.ts';
import type { AlertSummary } from '../src/contract_alerts.ts';
import type { Outlook, OutlookItem } from '../src/contract_outlook.ts';
import { bodyOf, complete, draftOf, movedTo, plannedFor } from '../src/draft/rest.ts';
import { bestText, depthChanceText, nowBandText, offsetText, percentText, segmentChanges, standingLine, surfaceWords } from '../src/outlook_words.ts';
import { depthCourse, plannedSteps, validRecipe } from '../src/pictures/history_series.ts';
import { axisEndMm, stripText } from '../src/pictures/strip_geometry.ts';
import { withUnits } from '../src/units.ts';

test('no chance is shown as certain', () => {
  assert.deepEqual([0, 0.004, 0.01, 0.914, 0.99, 0.996, 1].map(percentText), ['under 1 %', 'under 1 %', '1 %', '91 %', '99 %', 'over 99 %', 'over 99 %']);
});

test('a standing is never said with a chance that speaks of something else', () => {
  assert.equal(standingLine({ standing: 'inside', joint_chance: 0.91 }), 'inside, 91 %');
  assert.equal(standingLine({ standing: 'inside', joint_chance: 0.4 }), 'inside in depth; all windows 40 %');
  assert.equal(standingLine({ standing: 'shallow', joint_chance: 0.34 }), 'shallow 34 % chance inside');
});

test('what is carried on is said in the reader’s units, and nothing where there is nothing', () => {
  assert.equal(offsetText({ temperature_k: -12, carbon_potential_wt_pct: 0.001 }, 'degc'), 'runs 12 K below set point; carried on, fading');
  assert.equal(offsetText({ temperature_k: 10, carbon_potential_wt_pct: -0.03 }, 'degf'), 'runs 18 °F above set point, carbon potential 0.03 % C below set point; carried on, fading');
  assert.equal(offsetText({ temperature_k: 0.3, carbon_potential_wt_pct: 0.004 }, 'degc'), null);
  assert.equal(offsetText(null, 'degc'), null);
});

const outlook = { minutes_left: 60, best: { at: '', minutes_from_now: 95, joint_chance: 0.62 } } as Outlook;
test('the best time is said against the planned end', () => {
  assert.equal(bestText(outlook), 'in 1 h 35 min, 35 min after the planned end, 62 %');
  assert.equal(bestText({ ...outlook, best: { at: '', minutes_from_now: 0, joint_chance: 0.5 } }), 'now, 1 h before the planned end, 50 %');
  assert.equal(bestText({ ...outlook, best: { at: '', minutes_from_now: 60.4, joint_chance: 0.5 } }), 'at the planned end, 50 %');
  assert.equal(bestText({ ...outlook, best: null }), null);
});

test('chances of depth and surface name the side that matters', () => {
  assert.equal(depthChanceText({ shallow: 0.66, inside: 0.339, deep: 0.001 }), 'shallow 66 %, inside 34 %');
  assert.equal(surfaceWords({ surface_chance: { below: 0.02, inside: 0.9, above: 0.08 } } as OutlookItem), 'inside 90 %, above 8 %');
  assert.equal(surfaceWords({ surface_chance: null } as OutlookItem), 'no window asked');
});

test('a missing band is said; an older document keeps its own word', () => {
  assert.equal(nowBandText(null, '5 to 95 %', 'mm'), 'band not computed');
  assert.equal(nowBandText(undefined, 'as the document says', 'mm'), 'as the document says');
  assert.equal(nowBandText({ low: 0.78, median: 0.8, high: 0.84 }, '', 'mm'), '0.78 – 0.84 mm');
});

const rest = [{ name: 'boost', duration_min: 30, temperature_degc: 930, carbon_potential_wt_pct: 1.1, ramp_min: 4 }, { name: 'diffuse', duration_min: 90, temperature_degc: 930, carbon_potential_wt_pct: 0.8 }];
test('what is tried shrinks with the plant’s clock as the plan itself does', () => {
  const draft = draftOf(rest, 0);
  const later = movedTo(draft, 10 * 60_000);
  assert.deepEqual([later.segments[0]?.duration_min, later.segments[0]?.ramp_min, later.segments[1]?.duration_min], [20, 0, 90]);
  const past = movedTo(draft, 45 * 60_000);
  assert.deepEqual(past.segments.map((each) => [each.name, each.duration_min]), [['diffuse', 75]]);
  assert.equal(plannedFor(rest.slice(1), past.segments[0]!.from)?.name, 'diffuse', 'it still knows its own segment');
  assert.equal(movedTo(draft, 999 * 60_000).segments[0]?.duration_min, 0);
  assert.equal(movedTo(later, 0), later, 'never backwards');
});

test('the body of a trial has no empty segment and no member of our own', () => {
  const draft = draftOf([{ ...rest[0]!, duration_min: 0 }, rest[1]!], 0);
  assert.deepEqual(bodyOf(draft), [rest[1]]);
  assert.ok(!complete({ ...draft, segments: [{ ...draft.segments[1]!, duration_min: NaN }] }));
});

test('what is nearly over when a trial is sent is never refused for it', () => {
  const one = { name: 'diffuse', temperature_degc: 930, carbon_potential_wt_pct: 0.8 };
  // The daemon takes segments from half a minute on, and ramps no longer than their segment.
  assert.deepEqual(bodyOf(draftOf([{ ...one, duration_min: 0.3, ramp_min: 0 }, { ...one, duration_min: 12.3449, ramp_min: 12.3449 }], 0)), [{ ...one, duration_min: 12.34, ramp_min: 12.34 }]);
  assert.deepEqual(bodyOf(draftOf([{ ...one, duration_min: 0 }], 0)), [{ ...one, duration_min: 0.5 }]);
});

test('a change of a segment in words', () => {
  assert.equal(segmentChanges({ ...rest[1]!, duration_min: 115, carbon_potential_wt_pct: 0.85 }, rest[1], 'degc'), '25 min longer, 0.05 % C more');
  assert.equal(segmentChanges({ ...rest[1]!, temperature_degc: 920 }, rest[1], 'degf'), '18 °F cooler');
  assert.equal(segmentChanges(rest[1]!, rest[1], 'degc'), '');
});

const recipe = { name: 'r', segments: [{ name: 'boost', duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 1.1 }, { name: 'diffuse', duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 0.8 }] };
test('a changed plan counts from when it was taken, the rest from now', () => {
  const plan = { at: '1970-01-01T00:30:00Z', person: 'p', reason: 'r', segments: [{ name: 'boost', duration_min: 50, temperature_degc: 930, carbon_potential_wt_pct: 1.1 }] };
  const spans = (steps: { from_s: number; to_s: number }[]) => steps.map(({ from_s, to_s }) => [from_s / 60, to_s / 60]);
  assert.deepEqual(spans(plannedSteps(recipe, 0, [], null, null)), [[0, 60], [60, 120]]);
  assert.deepEqual(spans(plannedSteps(recipe, 0, [plan], null, null)), [[0, 30], [30, 80]]);
  assert.deepEqual(spans(plannedSteps(recipe, 0, [plan], [{ ...plan.segments[0]!, duration_min: 35 }], 40 * 60)), [[0, 30], [30, 40], [40, 75]]);
  assert.deepEqual([validRecipe(recipe, []), validRecipe(recipe, undefined)], [recipe, recipe]);
  assert.equal(validRecipe(recipe, [plan]).segments, plan.segments);
});

test('the curve of depth goes on into the outlook, as hardened, and survives documents without it', () => {
  const history = { time_s: [0, 60], items: [{ name: 'A', case_depth_mm: [null, 0.5], surface_carbon_wt_pct: [], part_temperature_degc: [], case_depth_low_mm: [null, 0.3], case_depth_high_mm: [null, 0.5] }],
    outlook: { time_s: [60, 120, 180], items: [{ name: 'A', case_depth_low_mm: [0.3, 0.4, 0.5], case_depth_median_mm: [0.4, 0.5, 0.6], case_depth_high_mm: [0.5, 0.6, 0.7] }] } } as unknown as History;
  const course = depthCourse(history, 'A', 0.1);
  assert.deepEqual([course.time_s, course.aheadFrom], [[0, 60, 120, 180], 2]);
  assert.deepEqual(course.depth, [null, 0.5, null, null]);
  assert.deepEqual(course.ahead.map((mm) => mm?.toFixed(2)), [undefined, undefined, '0.60', '0.70']);
  assert.deepEqual(course.high.map((mm) => mm?.toFixed(2)), [undefined, '0.60', '0.70', '0.80']);
  const { outlook: _, ...old } = history;
  assert.deepEqual(depthCourse({ ...old, items: [{ ...history.items[0]!, case_depth_low_mm: undefined, case_depth_high_mm: undefined }] }, 'A', 0).low, [null, null]);
});

test('the strip holds the outlook and says it', () => {
  const item = { depth_mm: [0, 4], carbon_wt_pct: [0.8, 0.2], case_depth_mm: 0.8, window_mm: [0.9, 1.2] as const, band_mm: { low: 0.78, median: 0.8, high: 0.84 }, outlook_mm: { low: 0.85, median: 0.9, high: 0.93 } };
  const text = stripText(item, 'mm', false);
  for (const part of ['Its band is 0.78 to 0.84 mm.', 'At the end of the plan 0.90 mm, band 0.85 to 0.93 mm.']) assert.ok(text.includes(part), text);
  assert.ok(axisEndMm({ ...item, outlook_mm: { low: 1, median: 2, high: 3.1 } }) > 3.1);
});

test('sentences of the daemon in the reader’s units', () => {
  const shown = { length: 'inch', temperature: 'degf' } as const;
  assert.equal(withUnits('case depth 0.89 mm at the end, window 0.95 to 1.25 mm; 940 degC', shown), 'case depth 0.035 in at the end, window 0.037 to 0.049 in; 1724 °F');
  assert.equal(withUnits('a bore of 24 mm', shown), 'a bore of 24 mm');
  assert.equal(withUnits('0.89 mm', { length: 'mm', temperature: 'degc' }), '0.89 mm');
});

const alert = (id: number, severity: AlertSummary['severity'], more: Partial<AlertSummary> = {}): AlertSummary => ({ id, severity, kind: 'k', sentence: 's', advice: null, since: '2026-03-02T06:00:00Z', acknowledged: false, shelved: false, ...more });
test('only what nobody answered sounds, and only from the severity chosen here', () => {
  const all = [alert(1, 'note'), alert(2, 'warning'), alert(3, 'urgent'), alert(4, 'urgent', { acknowledged: true }), alert(5, 'urgent', { shelved: true })];
  const sound = { on: true, from: 'warning' as const, untilMs: 0, silenced: [] };
  assert.deepEqual(calling(all, sound).map((each) => each.id), [2, 3]);
  assert.deepEqual(calling(all, { ...sound, from: 'urgent' }).map((each) => each.id), [3]);
});

test('silence covers what was there, nothing newer and nothing that became worse, and it ends', () => {
  const sound = { on: true, from: 'warning' as const, untilMs: 1000, silenced: [silenceKey(alert(2, 'warning'))] };
  assert.deepEqual(heard([alert(2, 'warning')], sound, 500), []);
  assert.equal(heard([alert(2, 'urgent')], sound, 500).length, 1);
  assert.equal(heard([alert(3, 'warning')], sound, 500).length, 1);
  assert.equal(heard([alert(2, 'warning')], sound, 1000).length, 1);
});

test('the Floor’s alerts are found everywhere, once, worst first; an older Floor has none', () => {
  const floor = { alerts: { plant: [alert(5, 'warning', { shelved: true })] }, furnaces: [{ alerts: [alert(2, 'note')], loads: [{ alerts: [alert(3, 'urgent'), alert(2, 'note')] }] }] } as unknown as Floor;
  assert.deepEqual(alertsOnFloor(floor).map((each) => each.id), [3, 2, 5]);
  assert.deepEqual(alertsOnFloor({ furnaces: [{ loads: [{}] }] } as unknown as Floor), []);
  assert.equal(worstOf(floor), 'urgent');
  assert.equal(worstOf({ alerts: { active: 2, unacknowledged: 1, worst: 'urgent', newest_id: 2, plant: [alert(1, 'urgent', { acknowledged: true }), alert(2, 'warning')] }, furnaces: [] } as unknown as Floor), 'warning', 'an answered one does not call');
  assert.equal(countWords(3, 2), '3 alerts, 2 not acknowledged');
  assert.equal(countWords(0, 0), 'no alert');
});
