// DEVELOPMENT ONLY: answers the routes of /api/v1 with the invented plant of mock_plant.mjs and serves
// dist/, so that the dashboard can be worked on and photographed without the daemon. Loopback only.
//   node dev/mock_server.mjs [--port 8090] [--speed 60] [--loads 35] [--plain 1]     plain: as before there was an outlook
//   POST /dev/alert   a new urgent alert;   POST /dev/revise?load=6   somebody else changes a load
//   POST /dev/away?seconds=20   answers nothing for so long;   POST /dev/unready?seconds=20   answers 503
import { createReadStream, existsSync } from 'node:fs';
import { createServer } from 'node:http';
import { dirname, extname, join, normalize } from 'node:path';
import { fileURLToPath } from 'node:url';
import { MockAlerts } from './mock_alerts.mjs';
import { answerPlant, pathOf } from './mock_desk.mjs';
import { floorItem, historyOutlook, missingOf, nowBand, proposal, segmentOf, segmentsNow, snapshotMembers, trial } from './mock_outlook.mjs';
import { chamberOf, conditionOf, furnaceOf, furnaces, inputsAt, itemsAt, messageOf, openingLoads, plannedMinutes, segmentAt, steels } from './mock_plant.mjs';

const argument = (name, otherwise) => { const i = process.argv.indexOf(`--${name}`); return i > 0 ? Number(process.argv[i + 1]) : otherwise; };
const port = argument('port', 8090), speed = argument('speed', 60);
const dist = join(dirname(fileURLToPath(import.meta.url)), '../dist');
const begun = Date.now();
const nowMs = () => begun + (Date.now() - begun) * speed;
const stamp = (ms) => `${new Date(ms).toISOString().slice(0, 19)}Z`;
const loads = openingLoads(nowMs()).slice(-argument('loads', 35));
const plain = argument('plain', 0) === 1;
const alerts = new MockAlerts(nowMs(), furnaces, loads);
let sequence = 1, nextId = 200, awayUntil = 0, unreadyUntil = 0;
const band = plain ? 'band not computed' : '5 to 95 %';
const rank = { stale: 0, 'no data yet': 1, live: 2, 'no load': 9 };

const dataAge = (load) => ({ stale: 1500, 'no data yet': null }[load.trouble] === undefined ? 20 : { stale: 1500 }[load.trouble] ?? null);
function controllingOf(load) {
  const items = itemsAt(load, nowMs(), 40);
  return items.reduce((worst, each) => (each.case_depth_window_mm[0] - (each.case_depth_mm ?? 0) > worst.case_depth_window_mm[0] - (worst.case_depth_mm ?? 0) ? each : worst));
}
function live(load) {
  const now = nowMs();
  return { inputs: inputsAt(load, now), segment: load.ended_at ? null : segmentOf(load, now), minutes_left: leftOf(load, now) };
}
function leftOf(load, now) {
  const plan = load.plans?.at(-1);
  return plan ? segmentsNow(load).reduce((sum, each) => sum + each.duration_min, 0) - (now - Date.parse(plan.at)) / 60_000 : plannedMinutes(load) - (now - Date.parse(load.definition.started_at)) / 60_000;
}
const worst = (load) => ({ miss: -1, stale: 0, 'no data yet': 1, overdue: 2, planned: 3, held: 4, disagree: 5, doubt: 5 }[load.trouble] ?? 9);
const positionOf = (load) => (load.place ? { place: load.place, places: 30 } : null);
function floor() {
  const rows = furnaces.map((furnace) => {
    const open = loads.filter((load) => load.definition.furnace === furnace.id && !load.ended_at);
    const condition = open.length ? conditionOf(open[0]) : 'no load';
    return { id: furnace.id, name: furnace.name, process: furnace.process, condition, data_time: stamp(nowMs() - 20_000), data_age_s: open.length ? dataAge(open[0]) : 20,
      chambers: furnace.chambers, line: furnace.line,
      loads: open.sort((a, b) => worst(a) - worst(b)).map((load, i) => { const { profile, hardness, ...item } = controllingOf(load);
        return { id: load.id, name: load.definition.name, chamber: load.definition.chamber, person: load.definition.person, started_at: load.definition.started_at,
          condition: conditionOf(load), message: messageOf(load), ...live(load), item_count: load.definition.items.length, position: positionOf(load), data_age_s: dataAge(load), ...(plain ? {} : { alerts: alerts.ofLoad(load.id) }), item: { ...(plain ? item : floorItem(load, nowMs(), item)), strip: i < 4 ? profile : null } }; }), ...(plain ? {} : { alerts: alerts.ofFurnace(furnace.id) }) };
  });
  rows.sort((a, b) => rank[a.condition] - rank[b.condition]);
  return { sequence, now: stamp(nowMs()), plant: 'Invented demo plant', demo: true, clock_speed: speed, band, furnaces: rows, ...(plain ? {} : { alerts: alerts.floor() }) };
}
const rowOf = (load) => ({ id: load.id, name: load.definition.name, furnace: load.definition.furnace, furnace_name: furnaces.find((each) => each.id === load.definition.furnace).name, chamber: load.definition.chamber ?? 'main',
  person: load.definition.person, started_at: load.definition.started_at, ended_at: load.ended_at, state: load.cancelled ? 'cancelled' : load.ended_at ? 'ended' : 'open', path: pathOf(load), recipe: load.definition.recipe, revision: load.revision });
function snapshot(load) {
  const now = nowMs(), begin = Date.parse(load.definition.started_at), at = (min) => stamp(begin + min * 60_000);
  const here = pathOf(load).at(-1);
  const place = here.outside ? null : { furnace: here.furnace, furnace_name: here.furnace_name, chamber: here.chamber, chamber_name: here.chamber_name, since: here.from, position: positionOf(load) };
  return { load: rowOf(load), sequence, place, now: stamp(now), data_time: stamp(now - (dataAge(load) ?? 0) * 1000), data_age_s: dataAge(load), state_time: stamp(now), condition: conditionOf(load), message: messageOf(load), band,
    ...live(load), ...(plain ? {} : { ...snapshotMembers(load, now, !load.ended_at), alerts: alerts.ofLoad(load.id) }), items: itemsAt(load, now).map((each) => (plain ? each : { ...each, case_depth_band_mm: nowBand(load, now, each), surface_carbon_band_wt_pct: missingOf(load) ? null : { low: each.surface_carbon_wt_pct - 0.03, median: each.surface_carbon_wt_pct, high: each.surface_carbon_wt_pct + 0.03 } })), controlling_item: controllingOf(load).name,
    notes: load.trouble === 'held' ? [{ kind: 'capped at carbide limit', item: 'A', from: at(60), to: at(75), text: 'The gas would form carbide at this temperature: the surface is held at the carbide limit.' }] : [],
    gaps: load.trouble === 'none' ? [] : [{ input: 'carbon_potential', basis: 'held', from: at(60), to: at(72) }, { input: 'temperature', basis: 'planned', from: at(80), to: at(95) }], shift_notes: load.notes };
}
function history(load) {
  const begin = Date.parse(load.definition.started_at), end = load.ended_at ? Date.parse(load.ended_at) : nowMs(), many = 240;
  const out = { time_s: [], temperature_degc: [], temperature_basis: [], carbon_potential_wt_pct: [], carbon_potential_basis: [], items: load.definition.items.map((each) => ({ name: each.name, case_depth_mm: [], surface_carbon_wt_pct: [], part_temperature_degc: [], ...(plain ? {} : { case_depth_low_mm: [], case_depth_high_mm: [] }) })), ...(plain ? {} : { outlook: historyOutlook(load, nowMs()) }) };
  for (let i = 0; i <= many; ++i) {
    const at = begin + (end - begin) * i / many, min = (at - begin) / 60_000;
    out.time_s.push(at / 1000);
    out.temperature_degc.push(930 - 700 * Math.exp(-min / 15) + Math.sin(at / 400_000) * 4);
    out.temperature_basis.push(load.trouble !== 'none' && min > 80 && min < 95 ? 'planned' : 'measured');
    const segment = segmentAt(load, at);
    out.carbon_potential_wt_pct.push(load.definition.recipe.segments[segment.index].carbon_potential_wt_pct * (1 - 0.3 * Math.exp(-segment.elapsed_min / 12)) + Math.sin(at / 300_000) * 0.015);
    out.carbon_potential_basis.push(load.trouble !== 'none' && min > 60 && min < 72 ? 'held' : 'measured');
    itemsAt(load, at, 4).forEach((each, k) => { out.items[k].case_depth_mm.push(each.case_depth_mm); out.items[k].surface_carbon_wt_pct.push(each.surface_carbon_wt_pct); out.items[k].part_temperature_degc.push(each.part_temperature_degc);
      const now = nowBand(load, at, each); out.items[k].case_depth_low_mm?.push(now?.low ?? null); out.items[k].case_depth_high_mm?.push(now?.high ?? null); });
  }
  return out;
}
function complaint(body) {
  if (!String(body.name ?? '').trim()) return ['name', 'The load number is empty. Enter 1 to 60 characters.'];
  if (!String(body.person ?? '').trim()) return ['person', 'The name of the person is empty.'];
  if (!furnaces.some((each) => each.id === body.furnace)) return ['furnace', `No furnace is called "${body.furnace}".`];
  for (const [i, each] of (body.items ?? []).entries()) {
    const [low, high] = each.case_depth_window_mm ?? [];
    if (typeof each.steel === 'string' && !steels.some((steel) => steel.id === each.steel)) return [`items[${i}].steel`, `The library has no steel "${each.steel}".`];
    if (!(low > 0 && high > low)) return [`items[${i}].case_depth_window_mm`, `The window of item ${i + 1} must rise: its lower end ${low} mm is not below its upper end ${high} mm.`];
  }
  return null;
}

const types = { '.html': 'text/html; charset=utf-8', '.js': 'text/javascript', '.css': 'text/css', '.svg': 'image/svg+xml' };
const policy = "default-src 'self'; script-src 'self'; style-src 'self'; object-src 'none'; base-uri 'none'; frame-ancestors 'none'";
const streams = new Set();
function send(response, status, body, headers = {}) {
  response.writeHead(status, { 'content-type': status >= 400 ? 'application/problem+json' : 'application/json', 'cache-control': 'no-store', ...headers });
  response.end(JSON.stringify(body));
}
const problem = (response, status, title, detail, field) => send(response, status, { type: `/problems/${title.toLowerCase().replaceAll(' ', '-')}`, title, status, detail, field });

async function bodyOf(request) { let text = ''; for await (const piece of request) text += piece; return text ? JSON.parse(text) : {}; }
async function answer(request, response) {
  const url = new URL(request.url, 'http://localhost'), path = url.pathname;
  if (path.startsWith('/dev/')) {
    const until = Date.now() + 1000 * Number(url.searchParams.get('seconds') ?? 20);
    if (path === '/dev/alert') { const id = alerts.raise(nowMs()); tellAlerts(); return send(response, 200, { id }); }
    if (path === '/dev/revise') { loads.find((each) => each.id === Number(url.searchParams.get('load'))).revision += 1; ++sequence; return send(response, 200, {}); }
    if (path === '/dev/away') awayUntil = until; else unreadyUntil = until;
    return send(response, 200, {});
  }
  if (Date.now() < awayUntil) return undefined;  // the connection hangs, as with a dead machine
  if (!path.startsWith('/api/')) return file(path === '/' ? '/index.html' : path, response);
  if (Date.now() < unreadyUntil) return problem(response, 503, 'Starting', 'hearthfront is starting: it re-derives the open loads from their readings.');
  if (path === '/api/v1/floor') return send(response, 200, floor());
  if (path === '/api/v1/steels') return send(response, 200, { steels });
  const plant = { path, url, request, response, send, problem, bodyOf, loads, rowOf, nowMs, stamp, bump: () => ++sequence };
  if (!plain && await alerts.answer(plant)) { if (request.method === 'POST') tellAlerts(); return undefined; }
  if (await answerPlant(plant)) return undefined;
  if (path === '/api/v1/events') {
    response.writeHead(200, { 'content-type': 'text/event-stream', 'cache-control': 'no-store' });
    response.write(`event: floor\nid: ${sequence}\ndata: ${JSON.stringify(floor())}\n\n`);
    streams.add(response);
    return request.on('close', () => streams.delete(response));
  }
  if (path === '/api/v1/loads' && request.method === 'GET') {
    const want = url.searchParams, limit = Number(want.get('limit') ?? 50), before = Number(want.get('cursor') ?? Infinity);
    const found = loads.filter((each) => each.id < before && (!want.get('furnace') || each.definition.furnace === want.get('furnace')) && (!want.get('state') || rowOf(each).state === want.get('state'))).reverse();
    return send(response, 200, { loads: found.slice(0, limit).map(rowOf), next_cursor: found.length > limit ? String(found[limit - 1].id) : null });
  }
  if (path === '/api/v1/loads') {
    const body = await bodyOf(request), bad = complaint(body);
    if (bad) return problem(response, 422, 'Load not accepted', bad[1], bad[0]);
    const load = { id: nextId++, trouble: 'none', ended_at: null, revision: 1, notes: [], definition: { chamber: 'main', ...body } };
    if (furnaceOf(body.furnace).line) load.place = 1;
    loads.push(load);
    return send(response, 201, rowOf(load), { location: `/api/v1/loads/${load.id}` });
  }
  if (!/^\/api\/v1\/loads\//.test(path)) return problem(response, 404, 'Unknown', `There is no ${path}.`);
  const [, id, rest] = /^\/api\/v1\/loads\/(\d+)(?:\/(\w+))?$/.exec(path) ?? [];
  const load = loads.find((each) => each.id === Number(id));
  if (!load) return problem(response, 404, 'Unknown load', 'There is no load with this number. It may have been opened from an old link.');
  if (rest === 'snapshot') {
    const etag = `"${load.id}-${sequence}"`;
    if (request.headers['if-none-match'] === etag) return response.writeHead(304).end();
    return send(response, 200, snapshot(load), { etag });
  }
  if (rest === 'revisions') return send(response, 200, { revisions: load.revisions ?? [] });
  if (rest === 'history') return send(response, 200, history(load));
  const body = await bodyOf(request);
  if (rest === 'trial' || rest === 'proposal') {
    if (missingOf(load)) return problem(response, 409, 'No outlook', missingOf(load));
    if (rest === 'trial' && body.segments.some((each) => each.temperature_degc > 1000)) return problem(response, 422, 'Trial not accepted', 'Segment 1 asks 1005 degC; this furnace goes to 980 degC. Enter less.', 'segments[0].temperature_degc');
    return send(response, 200, rest === 'trial' ? trial(load, nowMs(), body.segments) : await new Promise((go) => setTimeout(() => go(proposal(load, nowMs(), body.asked_chance ?? 0.9)), 600)));
  }
  if (rest && !String(body.person ?? '').trim()) return problem(response, 422, 'Name missing', 'The name of the person is empty.', 'person');
  const revise = (what, reason, changes) => {
    load.revision += 1;
    (load.revisions ??= []).unshift({ revision: load.revision, at: stamp(nowMs()), person: body.person, what, reason, changes });
    ++sequence;
    return send(response, 200, { ...rowOf(load), definition: load.definition });
  };
  if (request.method === 'PUT') {
    if (body.expected_revision !== load.revision) return problem(response, 409, 'Load changed', 'Somebody changed this load while you typed.', 'expected_revision');
    const bad = complaint(body.load);
    if (bad) return problem(response, 422, 'Load not accepted', bad[1], bad[0]);
    if (!String(body.reason ?? '').trim()) return problem(response, 422, 'Reason missing', 'The reason is empty. Say in a few words why the load is corrected.', 'reason');
    const before = JSON.stringify(load.definition.items.map((each) => each.steel.name ?? each.steel)), after = JSON.stringify(body.load.items.map((each) => each.steel.name ?? each.steel));
    load.definition = body.load;
    return revise('corrected', body.reason, before === after ? [{ field: 'recipe', before: 'as it was', after: 'as it is' }] : [{ field: 'items[0].steel', before, after }]);
  }
  if (rest === 'plan') {
    if (body.expected_revision !== load.revision) return problem(response, 409, 'Load changed', 'Somebody changed this load meanwhile.', 'expected_revision');
    if (!String(body.reason ?? '').trim()) return problem(response, 422, 'Reason missing', 'The reason is empty.', 'reason');
    (load.plans ??= []).push({ at: stamp(nowMs()), person: body.person, reason: body.reason, segments: body.segments });
    return revise('plan changed', body.reason, []);
  }
  if (rest === 'move') {
    const at = body.at ?? stamp(nowMs()), last = (load.definition.path ??= [{ from: load.definition.started_at, furnace: load.definition.furnace, chamber: load.definition.chamber }]).at(-1);
    load.definition.path.push(body.outside ? { from: at, outside: true } : { from: at, furnace: body.furnace ?? last.furnace, chamber: body.chamber });
    if (!body.outside && !chamberOf(body.furnace ?? last.furnace, body.chamber)) return problem(response, 422, 'No such chamber', 'There is no such chamber.', 'chamber');
    if (!body.outside) { load.definition.furnace = body.furnace ?? last.furnace; load.definition.chamber = body.chamber; }
    return revise('moved', null, [{ field: 'path', before: last.chamber ?? 'outside', after: body.outside ? 'outside' : body.chamber }]);
  }
  if (rest === 'cancel') { load.cancelled = true; load.ended_at = stamp(nowMs()); return revise('cancelled', body.reason, []); }
  if (rest === 'notes') { load.notes.push({ at: stamp(nowMs()), person: body.person, text: body.text }); ++sequence; return send(response, 201, {}); }
  if (rest === 'end') { load.ended_at = body.ended_at ?? stamp(nowMs()); ++sequence; return send(response, 200, rowOf(load)); }
  return send(response, 200, { ...rowOf(load), definition: load.definition });
}
function file(path, response) {
  const place = normalize(join(dist, path));
  if (!place.startsWith(dist) || !existsSync(place)) return problem(response, 404, 'Not found', path);
  response.writeHead(200, { 'content-type': types[extname(place)] ?? 'application/octet-stream', 'content-security-policy': policy, 'x-content-type-options': 'nosniff' });
  return createReadStream(place).pipe(response);
}
function tellAlerts() { for (const stream of streams) stream.write(`event: alerts\ndata: ${JSON.stringify({ sequence: alerts.sequence })}\n\n`); }
setInterval(() => {
  ++sequence;
  if (Date.now() < awayUntil || Date.now() < unreadyUntil) return;
  const data = JSON.stringify(floor());
  for (const stream of streams) {
    stream.write(`event: floor\nid: ${sequence}\ndata: ${data}\n\n`);
    for (const load of loads) if (!load.ended_at) stream.write(`event: load\ndata: ${JSON.stringify({ id: load.id, sequence })}\n\n`);
  }
}, 1000);
createServer((request, response) => { answer(request, response).catch((error) => problem(response, 500, 'Mock failed', String(error))); })
  .listen(port, '127.0.0.1', () => console.log(`invented plant at http://127.0.0.1:${port}/ (clock runs ${speed} times)`));
