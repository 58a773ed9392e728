// The form's way to the load document of the contract and back.
import assert from 'node:assert/strict';
import { test } from 'node:test';
import type { LoadDefinition } from '../src/contract.ts';
import { definitionOf } from '../src/draft/build.ts';
import { placeOf, plainDetail, whichOf } from '../src/draft/complaint.ts';
import { newDraft } from '../src/draft/draft.ts';
import { sameAs, withLibrarySteels } from '../src/draft/take.ts';

const earlier: LoadDefinition = {
  name: '2291', furnace: 'pit-2', chamber: 'main', person: 'Morning shift', started_at: '2026-03-02T06:05:00Z', charge_temperature_degc: 25, lattice_s: 60,
  recipe: { name: 'case 1.0 mm', segments: [{ name: 'boost', duration_min: 240, temperature_degc: 930, carbon_potential_wt_pct: 1.1 }] },
  items: [
    { name: 'A', part: 'pinion shaft', quantity: 36, steel: '20MnCr5', core_carbon_wt_pct: 0.2, section: { shape: 'plate', thickness_mm: 20 }, criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 }, case_depth_window_mm: [0.9, 1.2], surface_carbon_window_wt_pct: [0.7, 0.85], lag_min: 20 },
    { name: 'B', part: 'sleeve', quantity: 4, steel: { name: 'heat 55102', composition_wt_pct: { C: 0.2, Mn: 1.2 } }, section: { shape: 'bore', bore_diameter_mm: 20, wall_mm: 15 }, criterion: { kind: 'carbon', limit_wt_pct: 0.35 }, case_depth_window_mm: [0.5, 0.8] },
  ],
};

test('a load taken over and sent again is the same load with a new number, person and time', () => {
  const draft = { ...sameAs(earlier, '2291', newDraft('pit-2', 'Night shift')), name: '2301' };
  const built = definitionOf(draft, '2026-03-03T00:00:00Z');
  assert.ok('definition' in built);
  assert.deepEqual(JSON.parse(JSON.stringify(built.definition)), { ...earlier, name: '2301', person: 'Night shift', started_at: '2026-03-03T00:00:00Z' });
});

test('an empty number and one that is no number are named by their place, in words', () => {
  const draft = sameAs(earlier, '2291', newDraft('pit-2', 'x'));
  draft.segments[0]!.temperature_degc = null;
  const empty = definitionOf(draft, '2026-03-03T00:00:00Z');
  assert.ok('said' in empty && empty.said.field === 'recipe.segments[0].temperature_degc' && empty.said.detail.includes('empty'));
  draft.segments[0]!.temperature_degc = 930;
  draft.items[1]!.size.wall_mm = NaN;
  const wrong = definitionOf(draft, '2026-03-03T00:00:00Z');
  assert.ok('said' in wrong && wrong.said.field === 'items[1].section.wall_mm' && wrong.said.detail.includes('not a number'));
});

test('an incomplete time is said, not sent', () => {
  const built = definitionOf(newDraft('pit-2', 'x'), null);
  assert.ok('said' in built && built.said.field === 'started_at');
});

test('half a surface-carbon window is not silently dropped', () => {
  const draft = sameAs(earlier, '2291', newDraft('pit-2', 'x'));
  draft.items[0]!.surface_high = null;
  const built = definitionOf(draft, '2026-03-03T00:00:00Z');
  assert.ok('said' in built && built.said.field === 'items[0].surface_carbon_window_wt_pct');
});

test('a complaint lands on its own field or on the nearest one around it', () => {
  const shown = ['name', 'items', 'items[0]', 'items[0].case_depth_window_mm', 'items[1].steel'];
  assert.equal(placeOf('items[0].case_depth_window_mm[1]', shown), 'items[0].case_depth_window_mm');
  assert.equal(placeOf('items[0].section.thickness_mm', shown), 'items[0]');
  assert.equal(placeOf('items[1].steel', shown), 'items[1].steel');
  assert.equal(placeOf('items[10].steel', shown), 'items');
  assert.equal(placeOf('names', shown), null);
  assert.equal(placeOf(undefined, shown), null);
});

test('a steel spelled out is the library’s again only when it is the same steel', () => {
  const steel = (mn: number) => ({ id: '20MnCr5', standard: 'EN 10084', composition_wt_pct: { C: 0.2, Mn: mn } });
  const stored = { ...earlier, items: [{ ...earlier.items[0]!, steel: { name: '20MnCr5', composition_wt_pct: { C: 0.2, Mn: 1.25 } } }] };
  const draft = sameAs(stored, '2291', newDraft('pit-2', 'x'));
  assert.equal(withLibrarySteels(draft, [steel(1.25)]).items[0]?.steel, '20MnCr5');
  assert.equal(withLibrarySteels(draft, [steel(1.25)]).items[0]?.ownSteel, null);
  assert.equal(withLibrarySteels(draft, [steel(1.3)]).items[0]?.ownSteel?.name, '20MnCr5');
});

test('a complaint reads as a sentence with its place in words', () => {
  assert.equal(plainDetail('items[0].steel: expected a name.', 'items[0].steel'), 'Expected a name.');
  assert.equal(plainDetail('the start lies in the future.', 'started_at'), 'The start lies in the future.');
  assert.equal(whichOf('items[1].steel'), 'item 2');
  assert.equal(whichOf('recipe.segments[0].name'), 'segment 1');
  assert.equal(whichOf('name'), '');
});
