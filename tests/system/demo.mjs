// The README's first command as a newcomer runs it: deploy/demo (without the build) on a free port. Cases grow on
// every furnace within a minute, what is over is in the past loads, a second run goes on where the first stopped,
// and a taken port is told with what to do.
import { spawn } from 'node:child_process';
import { readFileSync, readdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { FURNACES, MOVING, SOURCE, binary, check, expect, finish, freePort, sleep, temporaryFolder, waitFor } from './support.mjs';

const BIN = binary();
const port = await freePort();
const url = `http://127.0.0.1:${port}`;
const state = join(temporaryFolder(), 'state');

function runDemo(words, environment = {}) {
  const demo = spawn('bash', [join(SOURCE, 'deploy/demo'), '--no-build', ...words], {
    env: { ...process.env, HEARTHFRONT_BIN: BIN, HEARTHFRONT_PORT: String(port), HEARTHFRONT_DEMO_STATE: state, ...environment },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  demo.out = '';
  for (const stream of [demo.stdout, demo.stderr]) stream.on('data', (data) => (demo.out += data));
  demo.over = new Promise((tell) => demo.once('close', (code) => tell(code)));
  return demo;
}

const within = (promise, limit_ms, what) =>
  Promise.race([promise, sleep(limit_ms).then(() => Promise.reject(new Error(`${what}: not within ${limit_ms / 1000} s`)))]);
const get = async (path) => (await fetch(url + path, { signal: AbortSignal.timeout(5000) })).json();
const floor = () => get('/api/v1/floor');
const depths = (document) => Object.fromEntries(document.furnaces.flatMap((furnace) =>
  furnace.loads.map((load) => [`${furnace.id} ${load.name}`, load.item.case_depth_mm ?? 0])));
const all = async (kind) => (await get(`/api/v1/loads?state=${kind}&limit=100`)).loads;
const logs = () => readdirSync(state).filter((name) => name.endsWith('.log'))
  .map((name) => `${name}: ${readFileSync(join(state, name), 'utf8').slice(-500)}`).join('\n');

let first_seen = [];
let stopped_at = 0;
const first = runDemo([]);

await check('it says where to look and how to stop', async () => {
  await waitFor('its words', 100000, () => first.out.includes('Stop with Ctrl-C'));
  expect(first.out.includes(url), first.out);
});

await check('every furnace has live loads in mid-cycle, the line thirty; the floor says that it is a demo', async () => {
  const fill = { 'twin-6': 2, 'line-7': 30 };
  const document = await waitFor('live loads everywhere', 60000, async () => {
    const now = await floor();
    return now.furnaces.every((furnace) =>
      furnace.loads.length === (fill[furnace.id] ?? 1) && furnace.loads.every((load) => load.condition === 'live')) && now;
  }).catch((error) => Promise.reject(new Error(`${error.message}\n${logs()}`)));
  expect(document.demo === true && document.clock_speed === 60, `demo ${document.demo}, speed ${document.clock_speed}`);
  expect(document.furnaces.map((furnace) => furnace.id).sort().join() === [...FURNACES, ...MOVING].sort().join(), 'other furnaces');
});

await check('within half a minute the case of a load has grown by more than 0.01 mm', async () => {
  const before = depths(await floor());
  await waitFor('growth', 30000, async () => {
    const now = depths(await floor());
    return Object.keys(before).some((key) => now[key] > before[key] + 0.01);
  });
});

await check('a load that was over before the demo began is among the past ones, with its result', async () => {
  const ended = await waitFor('a past load', 10000, async () => {
    const list = await all('ended');
    return list.length > 0 && list;
  });
  const result = await waitFor('its final result', 10000, async () => {
    const document = await get(`/api/v1/loads/${ended[0].id}/result`);
    return document.final && document;
  });
  expect(result.items[0].case_depth_mm > 0.3, JSON.stringify(result).slice(0, 300));
});

await check('while it runs, a second one on the same port tells what to do', async () => {
  const second = runDemo([]);
  expect((await within(second.over, 20000, 'end')) === 1, second.out);
  expect(second.out.includes('taken') && second.out.includes('HEARTHFRONT_PORT='), second.out);
});

await check('SIGTERM ends it with code 0 and nothing is left running', async () => {
  first_seen = [...(await all('open')), ...(await all('ended'))];
  stopped_at = Date.parse((await get('/api/v1/status')).now);
  first.kill('SIGTERM');
  expect((await within(first.over, 30000, 'end')) === 0, first.out + logs());
  await expectNobodyListens();
});

async function expectNobodyListens() {
  const answer = await fetch(`${url}/healthz`, { signal: AbortSignal.timeout(2000) }).catch(() => null);
  expect(answer === null, 'the daemon still answers');
}

const again = runDemo(['--seconds', '20']);
await check('a second run goes on from there: same loads, none twice, data time not turned back', async () => {
  await waitFor('its words', 60000, () => again.out.includes('Stop with Ctrl-C'));
  await sleep(4000);
  const now = Date.parse((await get('/api/v1/status')).now);
  expect(now >= stopped_at, `${now} after ${stopped_at}`);
  const loads = [...(await all('open')), ...(await all('ended'))];
  for (const load of first_seen) expect(loads.some((one) => one.id === load.id && one.name === load.name), `load ${load.name} is gone`);
  const keys = loads.map((load) => `${load.furnace} ${load.name}`);
  expect(new Set(keys).size === keys.length, keys.join());
});

await check('--seconds ends it by itself with code 0', async () => {
  expect((await within(again.over, 60000, 'end')) === 0, again.out);
  await expectNobodyListens();
});

await check('a folder that is not the demo\'s is left alone', async () => {
  const folder = temporaryFolder();
  writeFileSync(join(folder, 'mine.txt'), 'mine');
  const demo = runDemo([], { HEARTHFRONT_DEMO_STATE: folder });
  expect((await within(demo.over, 20000, 'end')) === 1 && demo.out.includes('not the demo'), demo.out);
  expect(readdirSync(folder).join() === 'mine.txt', readdirSync(folder).join());
});

finish();
