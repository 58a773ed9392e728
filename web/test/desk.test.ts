import assert from 'node:assert/strict';
import { test } from 'node:test';
import type { CsvMapping } from '../src/contract_csv.ts';
import type { Conflict, Furnace } from '../src/contract_plant.ts';
import { changeWords, fieldWords, nextNumber, segmentExtras } from '../src/draft/describe.ts';
import { newSegment } from '../src/draft/draft.ts';
import { keyFrom } from '../src/draft/key.ts';
import { noValueFrom, noValueText, sameMapping, useOf, withUse, withZone, zoneOf } from '../src/draft/mapping.ts';
import { merged } from '../src/draft/merge.ts';
import { picksAll, unsaved } from '../src/draft/picks.ts';
import { placeText, spotsFor, stayText } from '../src/draft/place.ts';
import { cellsOf, inOrder, zonesOf } from '../src/pictures/line_cells.ts';
import { routeOf } from '../src/routes.ts';
import { channelText, withTemperatures } from '../src/units.ts';

test('of two people’s changes, what I typed stays and the rest is theirs', () => {
  const base = { name: '2297', items: [{ key: 1, steel: 'a', low: 0.8 }, { key: 2, steel: 'b', low: 0.5 }], film: null as number | null };
  const mine = { ...base, items: [{ key: 1, steel: 'mine', low: 0.8 }, base.items[1]!] };
  const theirs = { name: '2297a', items: [{ key: 7, steel: 'a', low: 0.9 }, { key: 8, steel: 'theirs', low: 0.5 }], film: 5 };
  assert.deepEqual(merged(base, mine, theirs), { name: '2297a', items: [{ key: 1, steel: 'mine', low: 0.9 }, { key: 8, steel: 'theirs', low: 0.5 }], film: 5 });
  const fewer = { ...base, items: [base.items[0]!] };
  assert.deepEqual(merged(base, fewer, theirs).items, fewer.items, 'a list that I made longer or shorter is mine as a whole');
  assert.deepEqual(merged({ a: NaN }, { a: NaN }, { a: 3 }), { a: 3 }, 'text that is no number counts as unchanged where it is so in both');
});

test('a change reads as words', () => {
  assert.equal(fieldWords('items[1].case_depth_window_mm'), 'item 2, case depth window');
  assert.equal(fieldWords('recipe.segments[0].carbon_potential_wt_pct'), 'segment 1, carbon potential');
  assert.equal(changeWords({ field: 'items[0].steel', before: '16MnCr5', after: '20MnCr5' }), 'item 1, steel: 16MnCr5 → 20MnCr5');
  assert.equal(changeWords({ field: 'film_min', before: null, after: '10 min' }), 'film: set to 10 min');
  assert.equal(changeWords({ field: 'path[2]', before: 'outside', after: null }), 'stay 3: outside taken away');
});

test('what ends a segment reads in the units of the screen; the usual tolerance is not said', () => {
  const segment = { ...newSegment('boost'), ramp_min: 15, tolerance_min: 10, until: 'part_temperature' as const, untilValue: 10, longest_min: 90 };
  assert.equal(segmentExtras(segment, { temperature: 'degf', length: 'mm' }), 'ramp 15 min, until the parts are within 18 °F, at the latest after 1 h 30 min');
  assert.equal(segmentExtras({ ...newSegment(), tolerance_min: 10 }, { temperature: 'degc', length: 'mm' }), '');
});

test('the next load number follows the highest one and keeps its form', () => {
  assert.equal(nextNumber(['2297', '2298', 'trial']), '2299');
  assert.equal(nextNumber(['A-0099']), 'A-0100');
  assert.equal(nextNumber(['trial']), null);
  assert.equal(nextNumber([]), null);
});

test('places on a line follow its zones', () => {
  const zones = zonesOf([{ id: 'heat', name: 'Heat', places: 2 }, { id: 'boost', name: 'Boost', places: 3 }]);
  assert.deepEqual(zones.map((zone) => [zone.from, zone.to]), [[1, 2], [3, 5]]);
  const loads = [{ id: 5, position: { place: 5, places: 5 } }, { id: 3, position: { place: 3, places: 5 } }, { id: 9, position: null }];
  assert.deepEqual(cellsOf(zones, loads).map((cell) => [cell.place, cell.zone, cell.load?.id ?? null]), [[1, 0, null], [2, 0, null], [3, 1, 3], [4, 1, null], [5, 1, 5]]);
  assert.deepEqual(inOrder(loads).map((load) => load.id), [3, 5, 9]);
});

test('a load may move to any chamber but its own, those of its furnace first', () => {
  const furnace = (id: string, chambers: string[]): Furnace => ({ id, name: id, process: '', lag_min: 0, channels: [], open_loads: [], chambers: chambers.map((each) => ({ id: each, name: each })) });
  const spots = spotsFor([furnace('pit-1', ['main']), furnace('twin-6', ['heating', 'second'])], { furnace: 'twin-6', chamber: 'heating' }, 'twin-6');
  assert.deepEqual(spots.map((spot) => [spot.furnace, spot.chamber, spot.own]), [['twin-6', 'second', true], ['pit-1', 'main', false]]);
  assert.equal(spotsFor([furnace('twin-6', ['heating', 'second'])], null, 'twin-6').length, 2, 'from outside every chamber is open');
  assert.equal(placeText(null), 'Outside any furnace');
  assert.equal(placeText({ furnace: 'line-3', furnace_name: 'Line 3', chamber: 'boost', chamber_name: 'Boost', since: '', position: { place: 12, places: 30 } }), 'Line 3, Boost, tray position 12 of 30');
  assert.equal(stayText({ from: '', to: null, outside: true }), 'outside any furnace');
});

test('choosing for all shown, and only what differs is sent', () => {
  const conflicts: Conflict[] = [{ at: 't1', values: [1.1, 1.06], chosen: null }, { at: 't2', values: [2, 3], chosen: { value: 2, person: 'x', at: '' } }, { at: 't3', values: [5, 4], chosen: null }];
  assert.deepEqual(picksAll(conflicts, 'lower'), { t1: 1.06, t2: 2, t3: 4 });
  assert.deepEqual(picksAll(conflicts, 'higher'), { t1: 1.1, t2: 3, t3: 5 });
  assert.deepEqual(unsaved(conflicts, { t1: null, t2: 2 }), [{ at: 't1', value: null }]);
});

const mapping: CsvMapping = { encoding: 'auto', separator: ';', decimal: ',', thousands: null, comment: null, header_lines: 1, units_line: false, time_column: 'Time', date_column: 'Day', time_format: 'iso', time_zone: null, utc_offset_min: null, no_value: null,
  columns: [{ column: 'TC1', channel: 'temperature', unit: 'degC', factor: null }] };

test('a column has one use and a channel one column', () => {
  assert.deepEqual([useOf(mapping, 'Time'), useOf(mapping, 'Day'), useOf(mapping, 'TC1'), useOf(mapping, 'Notes')], ['time', 'date', { channel: 'temperature' }, 'unused']);
  const other = withUse(mapping, 'TC2', { channel: 'temperature' });
  assert.deepEqual(other.columns, [{ column: 'TC2', channel: 'temperature', unit: null, factor: null }]);
  assert.deepEqual(withUse(mapping, 'TC1', { channel: 'probe' }).columns, [{ column: 'TC1', channel: 'probe', unit: 'degC', factor: null }], 'the unit stays with the column');
  const timed = withUse(mapping, 'Day', 'time');
  assert.deepEqual([timed.time_column, timed.date_column], ['Day', null]);
  assert.equal(withUse(mapping, 'Time', 'unused').time_column, '');
});

test('zone and fixed offset exclude each other', () => {
  const berlin = withZone(mapping, 'Europe/Berlin');
  assert.deepEqual([berlin.time_zone, berlin.utc_offset_min, zoneOf(berlin)], ['Europe/Berlin', null, 'Europe/Berlin']);
  const fixed = withZone(berlin, 'offset');
  assert.deepEqual([fixed.time_zone, fixed.utc_offset_min, zoneOf(fixed)], [null, 0, 'offset']);
  assert.equal(zoneOf(mapping), '');
  assert.deepEqual(noValueFrom(noValueText({ ...mapping, no_value: ['---', 'NaN'] })), ['---', 'NaN']);
  assert.equal(noValueFrom(' ; '), null);
  assert.ok(sameMapping(mapping, { ...mapping, name: 'logger' }));
  assert.ok(!sameMapping(mapping, berlin));
});

test('addresses lead to their pages, broken ones to the Floor', () => {
  assert.deepEqual(routeOf('#/load/12/correct'), { page: 'correct', id: 12 });
  assert.deepEqual(routeOf('#/furnace/twin-6/files'), { page: 'files', id: 'twin-6' });
  assert.deepEqual(routeOf('#/library'), { page: 'library', shelf: 'parts', key: null });
  assert.deepEqual(routeOf('#/library/recipes/new'), { page: 'library', shelf: 'recipes', key: '' });
  assert.deepEqual(routeOf('#/library/parts/entry/new'), { page: 'library', shelf: 'parts', key: 'new' });
  assert.deepEqual(routeOf('#/furnace/%zz'), { page: 'furnace', id: '%zz' });
  assert.deepEqual(routeOf('#/nowhere'), { page: 'floor' });
});

test('a name becomes a key', () => {
  assert.equal(keyFrom('Sun gear, 2nd (Größe 3)'), 'sun-gear-2nd-grosse-3');
  assert.equal(keyFrom('  – '), '');
});

test('values and sentences follow the screen’s unit of temperature', () => {
  assert.equal(channelText(1700, 'degF', 'degc'), '926.7 °C');
  assert.equal(channelText(1200.5, 'mV', 'degc'), '1200.5 mV');
  assert.equal(withTemperatures('after quench to 60 degC and tempering 180 degC, 2 h', 'degf'), 'after quench to 140 °F and tempering 356 °F, 2 h');
});
