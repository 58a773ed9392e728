import assert from 'node:assert/strict';
import { test } from 'node:test';
import type { LoadBody, LoadDefinition } from '../src/contract.ts';
import { definitionOf, partBodyOf, recipeBodyOf } from '../src/draft/build.ts';
import { newDraft, newItem, newSegment } from '../src/draft/draft.ts';
import { correctionOf, partDraft, quenchFrom, sameAs, segmentFrom, withPart, withRecipe } from '../src/draft/take.ts';

const plain = (value: unknown): unknown => JSON.parse(JSON.stringify(value));
const full: LoadDefinition = {
  name: '2297', furnace: 'twin-6', chamber: 'heating', person: 'Early shift', started_at: '2026-03-02T06:05:33Z', film_min: 10, lattice_s: 60,
  path: [{ from: '2026-03-02T06:05:33Z', furnace: 'twin-6', chamber: 'heating' }, { from: '2026-03-02T08:05:00Z', furnace: 'twin-6', chamber: 'second' }, { from: '2026-03-02T10:00:00Z', outside: true }],
  quench: { temperature_degc: 60, tempering: { temperature_degc: 180, hours: 2 } }, masks: [{ furnace: 'twin-6', channel: 'heating_carbon', from: '2026-03-02T07:00:00Z', to: '2026-03-02T07:10:00Z', reason: 'burn-off' }],
  recipe: { name: 'case to depth', library: { key: 'case-10', version: 3 }, segments: [
    { name: 'boost', duration_min: 140, temperature_degc: 930, carbon_potential_wt_pct: 1.1, ramp_min: 15, tolerance_min: 10, until: { kind: 'case_depth', item: 'A', depth_mm: 0.85 }, longest_min: 300 },
    { name: 'diffuse', duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 0.8, until: { kind: 'surface_carbon', item: 'A', wt_pct: 0.75 } },
    { name: 'equalize', duration_min: 30, temperature_degc: 850, carbon_potential_wt_pct: 0.75, until: { kind: 'part_temperature', within_k: 8 } }] },
  items: [{ name: 'A', part: 'sun gear', quantity: 36, steel: { name: 'heat 55102', composition_wt_pct: { C: 0.18, Mn: 0.7, Cr: 1.65 } }, section: { shape: 'cylinder', diameter_mm: 22 }, criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 },
    case_depth_window_mm: [0.8, 1.05], grinding_stock_mm: 0.15, library: { key: 'sun-gear', version: 2 }, rework_of: { load: 12, item: 'A' }, initial_profile: { load: 12, item: 'A', depth_mm: [0, 1], carbon_wt_pct: [0.5, 0.2] } }],
};

test('a load that is corrected without a change is the same document', () => {
  const built = definitionOf(correctionOf(full), full.started_at);
  assert.ok('definition' in built);
  assert.deepEqual(plain(built.definition), plain(full));
});

test('the path begins where and when the corrected load was started, later stays are kept', () => {
  const built = definitionOf({ ...correctionOf(full), chamber: 'second' }, '2026-03-02T06:00:00Z');
  assert.ok('definition' in built);
  assert.deepEqual(built.definition.path, [{ from: '2026-03-02T06:00:00Z', furnace: 'twin-6', chamber: 'second' }, ...full.path!.slice(1)]);
});

test('a load that was moved is corrected at its first place, wherever it stands now', () => {
  const draft = correctionOf({ ...full, chamber: 'second' });
  assert.equal(draft.chamber, 'heating');
});

test('a load started again takes no path, no stretches and no earlier profile along', () => {
  const built = definitionOf({ ...sameAs(full as LoadBody, full.name, newDraft('twin-6', 'Late shift')), name: '2298' }, '2026-03-03T06:00:00Z');
  assert.ok('definition' in built);
  const { definition } = built;
  assert.equal(definition.path, undefined);
  assert.equal(definition.masks, undefined);
  assert.equal(definition.items[0]?.rework_of, undefined);
  assert.equal(definition.items[0]?.initial_profile, undefined);
  assert.equal(definition.person, 'Late shift');
  assert.deepEqual(plain(definition.recipe), plain(full.recipe));
  assert.equal(definition.items[0]?.grinding_stock_mm, 0.15);
});

test('half a tempering and an empty target are asked for by their places', () => {
  const draft = correctionOf(full);
  const half = definitionOf({ ...draft, quench: { ...draft.quench, temper_h: null } }, full.started_at);
  assert.ok('said' in half && half.said.field === 'quench.tempering.hours');
  const target = definitionOf({ ...draft, segments: draft.segments.map((each) => ({ ...each, untilValue: null })) }, full.started_at);
  assert.ok('said' in target && target.said.field === 'recipe.segments[0].until');
});

test('tempering alone goes with the usual quench', () => {
  const built = recipeBodyOf([{ ...newSegment('boost'), duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 1 }], { temperature_degc: null, temper_degc: 180, temper_h: 2 });
  assert.ok('body' in built);
  assert.deepEqual(built.body.quench, { temperature_degc: 60, tempering: { temperature_degc: 180, hours: 2 } });
});

test('nothing that was left empty is sent', () => {
  const built = recipeBodyOf([{ ...newSegment('boost'), duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 1, longest_min: 90 }], quenchFrom(null));
  assert.ok('body' in built);
  assert.deepEqual(plain(built.body), { segments: [{ name: 'boost', duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 1 }] }, 'a longest time belongs to a segment with a target');
});

test('a part goes to the library and back unchanged; an analysis without carbon is refused at its field', () => {
  const { name: _n, quantity: _q, library: _l, rework_of: _r, initial_profile: _i, part, ...body } = full.items[0]!;
  const built = partBodyOf(partDraft({ part: part!, ...body }));
  assert.ok('body' in built);
  assert.deepEqual(plain(built.body), plain({ part, ...body }));
  const none = partBodyOf({ ...partDraft({ part: part!, ...body }), ownSteel: { name: 'heat', composition_wt_pct: { C: null, Mn: 1 } } });
  assert.ok('said' in none && none.said.field === 'body.steel.composition_wt_pct.C');
});

test('a part or recipe of the library keeps what belongs to the load', () => {
  const { part, ...rest } = full.items[0]!;
  const item = withPart({ key: 'sun-gear', version: 4, name: 'sun gear', at: '', person: '', body: { part: part!, ...rest } }, { ...newItem(1), quantity: 12 });
  assert.deepEqual([item.name, item.quantity, item.part, item.library], ['B', 12, 'sun gear', { key: 'sun-gear', version: 4 }]);
  const draft = withRecipe({ key: 'case-10', version: 5, name: 'case 1.0 mm', at: '', person: '', body: { segments: full.recipe.segments } }, { ...newDraft('pit-1', 'x'), film_min: 5, quench: quenchFrom(full.quench) });
  assert.deepEqual([draft.recipeName, draft.recipeLibrary, draft.film_min, draft.quench.temper_degc], ['case 1.0 mm', { key: 'case-10', version: 5 }, 5, 180]);
  assert.equal(segmentFrom(full.recipe.segments[2]!).untilValue, 8);
});
