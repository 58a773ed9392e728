// DEVELOPMENT ONLY: the invented plant's furnaces, library, marked stretches, conflicts and logger files, held
// in memory and forgotten at the end. EVERY figure here is invented.
import { chamberOf, furnaceOf, furnaces, openingLoads } from './mock_plant.mjs';
import { guess, mappingsOf, preview, upload } from './mock_files.mjs';

const minute = 60_000;
export function pathOf(load) {
  const { definition } = load;
  const path = definition.path ?? [{ from: definition.started_at, furnace: definition.furnace, chamber: definition.chamber ?? 'main' }];
  return path.map((stay, i) => (stay.outside ? { from: stay.from, to: path[i + 1]?.from ?? null, outside: true }
    : { from: stay.from, to: path[i + 1]?.from ?? load.ended_at, furnace: stay.furnace, furnace_name: furnaceOf(stay.furnace)?.name ?? stay.furnace, chamber: stay.chamber, chamber_name: chamberOf(stay.furnace, stay.chamber)?.name ?? stay.chamber }));
}

const channel = (name, role, unit, value, more = {}) => ({ name, role, unit, chamber: 'main', low: 0, high: 1300, expected_interval_s: 60, typical_interval_s: 60, gap_limit_s: 180, hold_limit_s: 900, stored: 41230, conflicts: 0, undecided: 0, refused: {}, value,
  health: { state: 'good', sentence: 'Comes as it should.', since: null }, ...more });
const channels = {
  'twin-6': [channel('heating_temperature', 'temperature', 'degC', 929.4, { chamber: 'heating', refused: { 'bad time': 3 } }),
    channel('heating_carbon', 'carbon_potential', 'wt_pct', 1.084, { chamber: 'heating', conflicts: 3, undecided: 2 }),
    channel('second_temperature', 'temperature', 'degC', 912, { chamber: 'second', health: { state: 'stuck', sentence: 'The same value for 38 min. Check the thermocouple and the logger’s channel.', since: 38 } }),
    channel('second_carbon', 'carbon_potential', 'wt_pct', 0.81, { chamber: 'second', health: { state: 'noisy', sentence: 'Scatters five times as wide as it did yesterday. Check the probe’s plug and the reference air.', since: 190 } })],
};
const usual = [channel('temperature', 'temperature', 'degC', 928.2), channel('probe_emf', 'probe_emf', 'mV', 1148), channel('co', 'co', 'vol_pct', 20.1, { health: { state: 'silent', sentence: 'No reading for 25 min. Check the analyser and its line.', since: 25 } })];
const part = (name, steel, window, extra = {}) => ({ part: name, steel, section: { shape: 'plate', thickness_mm: 20 }, criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 }, case_depth_window_mm: window, ...extra });
const steps = (boost, diffuse) => openingLoads(0).find((load) => load.id === 6).definition.recipe.segments.map((each) => ({ ...each, ...(each.name === 'boost' ? { duration_min: boost } : each.name === 'diffuse' ? { duration_min: diffuse } : {}) }));
const entry = (key, name, body) => ({ key, name, retired: false, versions: [{ version: 1, at: '2026-02-02T08:00:00Z', person: 'Supervisor', name, body, retired: false }] });
const library = {
  parts: [entry('planet-gear', 'planet gear', part('planet gear', '20MnCr5', [0.9, 1.2], { surface_carbon_window_wt_pct: [0.7, 0.85] })), entry('sun-gear-ground', 'sun gear, ground', part('sun gear', '18CrNiMo7-6', [0.8, 1.05], { grinding_stock_mm: 0.15 })),
    entry('pin-own-heat', 'coupling pin, heat 55102', part('coupling pin', { name: 'heat 55102', composition_wt_pct: { C: 0.21, Mn: 1.3, Cr: 1.1, Ni: 0.1, Mo: 0.02, Si: 0.24 } }, [0.7, 0.9]))],
  recipes: [entry('case-10', 'case 1.0 mm', { segments: steps(240, 90), quench: { temperature_degc: 60, tempering: { temperature_degc: 180, hours: 2 } } }), entry('case-07', 'case 0.7 mm', { segments: steps(120, 45) })],
};
const latest = ({ key, versions }) => { const { version, name, at, person, body } = versions.at(-1); return { key, version, name, at, person, body }; };
const masks = [], conflicts = {};
let maskId = 0;

function conflictsOf(furnace, name, nowMs, stamp) {
  const key = `${furnace} ${name}`;
  conflicts[key] ??= name === 'heating_carbon' ? [12, 37, 61].map((ago, i) => ({ at: stamp(nowMs() - ago * minute), values: [1.062 + i / 100, 1.104 + i / 50], chosen: i === 2 ? { value: 1.082, person: 'Night shift', at: stamp(nowMs() - 30 * minute) } : null })) : [];
  const list = conflicts[key];
  return { conflicts: list, undecided: list.filter((each) => !each.chosen).length };
}
function channelsOf(id, nowMs, stamp) {
  return (channels[id] ?? usual).map(({ value, health, ...each }) => {
    const since = typeof health.since === 'number' ? stamp(nowMs() - health.since * minute) : null;
    const masked = masks.some((mask) => mask.furnace === id && mask.channel === each.name && !mask.withdrawn && Date.parse(mask.to) > nowMs() - minute);
    return { ...each, undecided: conflictsOf(id, each.name, nowMs, stamp).undecided, last: { at: stamp(nowMs() - 20_000), time: stamp(nowMs() - 20_000), value, age_s: 20 },
      health: masked ? { state: 'masked', sentence: 'A stretch was marked: its readings do not count.', since: stamp(nowMs() - 5 * minute) } : { ...health, since } };
  });
}
function recentOf(id, loads) {
  const seen = new Set();
  return loads.filter((load) => load.definition.furnace === id && !load.cancelled).sort((a, b) => b.id - a.id).flatMap(({ id: number, definition }) => {
    const { name, person, started_at, path, ...body } = definition, kind = JSON.stringify(body);
    if (seen.has(kind) || seen.size >= 8) return [];
    seen.add(kind);
    return [{ id: number, name, started_at, recipe: body.recipe.name, items: body.items.map((each) => ({ part: each.part, quantity: each.quantity, steel: each.steel.name ?? each.steel })), body }];
  });
}

// Answers what belongs here and says so with true.
export async function answerPlant({ path, url, request, response, send, problem, bodyOf, loads, nowMs, stamp, bump }) {
  const done = (body, status = 200) => { send(response, status, body); return true; };
  const refuse = (...words) => { problem(response, ...words); return true; };
  const post = request.method !== 'GET';
  const shelf = /^\/api\/v1\/library\/(parts|recipes)(?:\/([^/]+))?$/.exec(path);
  if (shelf) {
    const list = library[shelf[1]], found = list.find((each) => each.key === shelf[2]);
    if (!shelf[2]) return done({ entries: list.filter((each) => !each.retired).map(latest) });
    if (!post) return found ? done({ key: found.key, version: found.versions.length, name: found.name, body: latest(found).body, retired: found.retired, versions: found.versions }) : refuse(404, 'Unknown entry', 'The library has no such entry.');
    const body = await bodyOf(request);
    if (body.expected_version !== (found?.versions.length ?? 0)) return refuse(409, 'Library changed', found && body.expected_version === 0 ? 'There is an entry of that name already. Choose another name, or change that one.' : 'Somebody saved this entry meanwhile.');
    if (!String(body.person ?? '').trim()) return refuse(422, 'Name missing', 'The name of the person is empty.', 'person');
    if (!String(body.name ?? '').trim()) return refuse(422, 'Name missing', 'The entry has no name.', 'name');
    const into = found ?? entry(shelf[2], body.name, body.body);
    if (!found) { into.versions = []; list.push(into); }
    Object.assign(into, { name: body.name, retired: body.retired === true });
    into.versions.push({ version: into.versions.length + 1, at: stamp(nowMs()), person: body.person, name: body.name, body: body.body, retired: into.retired });
    return done(latest(into));
  }
  if (path === '/api/v1/readings') {
    const seen = {}, { readings } = await bodyOf(request);
    for (const each of readings) {
      const values = (seen[`${each.furnace} ${each.channel} ${each.time}`] ??= { each, values: new Set() }).values;
      values.add(each.value);
    }
    for (const { each, values } of Object.values(seen)) if (values.size > 1) conflictsOf(each.furnace, each.channel, nowMs, stamp).conflicts.unshift({ at: each.time, values: [...values], chosen: null });
    return done({ stored: readings.length, duplicate: 0, conflict: 0, refused: 0 });
  }
  if (path === '/api/v1/furnaces') return done({ furnaces: furnaces.map((each) => ({ ...each, channels: channelsOf(each.id, nowMs, stamp) })) });
  const [, id, rest = ''] = /^\/api\/v1\/furnaces\/([^/]+)(?:\/(.+))?$/.exec(path) ?? [];
  if (!id) return false;
  const furnace = furnaceOf(id);
  if (!furnace) return refuse(404, 'Unknown furnace', 'There is no furnace of this name.');
  if (rest === '') return done({ ...furnace, channels: channelsOf(id, nowMs, stamp) });
  if (rest === 'recent') return done({ loads: recentOf(id, loads) });
  if (rest === 'refused') return done({ refused: [{ received_at: stamp(nowMs() - 4 * minute), channel: 'heating_temperature', time_text: '31.02.2026 07:05', value_text: '928,4', reason: 'bad time: there is no such day' }, { received_at: stamp(nowMs() - 90 * minute), channel: 'co', time_text: stamp(nowMs() - 90 * minute), value_text: '412', reason: 'out of range 0 to 40' }] });
  if (rest === 'log/guess') return done(guess(await rawOf(request), channelsOf(id, nowMs, stamp)));
  if (rest === 'log/preview') { const raw = await rawOf(request), cut = raw.indexOf('\n'); return done(preview(JSON.parse(raw.slice(0, cut)), raw.slice(cut + 1))); }
  if (rest === 'log') return done(upload(id, url.searchParams.get('mapping'), await rawOf(request)));
  if (rest === 'mappings') return done({ mappings: mappingsOf(id) });
  const body = post ? await bodyOf(request) : {};
  if (post && !String(body.person ?? '').trim()) return refuse(422, 'Name missing', 'The name of the person is empty.', 'person');
  if (rest.startsWith('mappings/')) {
    const list = mappingsOf(id), name = rest.slice(9), at = list.findIndex((each) => each.name === name);
    if (body.expected_version !== (at < 0 ? 0 : list[at].version ?? 0)) return refuse(409, 'Mapping changed', 'Somebody saved a mapping of that name meanwhile.');
    const saved = { name, source: 'library', replaces_plant_file: false, version: body.expected_version + 1, at: stamp(nowMs()), person: body.person, mapping: body.mapping, fault: null };
    if (at < 0) list.push(saved); else list[at] = saved;
    return done(saved);
  }
  if (rest === 'push') {
    const line = loads.filter((load) => load.definition.furnace === id && !load.ended_at && load.place);
    const moved = line.map((load) => { const from = load.place++; const out = load.place > 30; if (out) load.ended_at = stamp(nowMs()); return { id: load.id, name: load.definition.name, from, to: out ? null : load.place }; });
    bump();
    return done({ at: stamp(nowMs()), moved });
  }
  const pick = /^channels\/([^/]+)\/conflicts$/.exec(rest);
  if (pick) {
    const got = conflictsOf(id, pick[1], nowMs, stamp);
    for (const choice of body.choices ?? []) { const found = got.conflicts.find((each) => each.at === choice.at); if (found) found.chosen = { value: choice.value, person: body.person, at: stamp(nowMs()) }; }
    return done(conflictsOf(id, pick[1], nowMs, stamp));
  }
  if (rest === 'masks' && !post) return done({ masks: masks.filter((each) => each.furnace === id) });
  if (rest === 'masks') {
    if (!(Date.parse(body.from) < Date.parse(body.to))) return refuse(422, 'Stretch not accepted', 'The stretch must begin before it ends.', 'from');
    const mask = { id: ++maskId, furnace: id, channel: body.channel, from: body.from, to: body.to, reason: body.reason, person: body.person, at: stamp(nowMs()), withdrawn: null, found_by: 'person' };
    masks.push(mask);
    return done(mask, 201);
  }
  const gone = /^masks\/(\d+)\/withdraw$/.exec(rest), mask = gone && masks.find((each) => each.id === Number(gone[1]));
  if (mask) { mask.withdrawn = { person: body.person, at: stamp(nowMs()) }; return done(mask); }
  return refuse(404, 'Unknown', `There is no ${path}.`);
}
async function rawOf(request) { const pieces = []; for await (const piece of request) pieces.push(piece); return Buffer.concat(pieces).toString('utf8'); }
