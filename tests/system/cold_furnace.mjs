// The demo's cold furnace as a visitor meets it, with the demo's own logger, feed and people: a load stands inside
// until the heater fails; the projected miss is told more than an hour before the end; the proposal is adopted by a
// named person; the furnace follows it, nothing that was is changed, and the load comes out inside its windows.
// Stopped twice on the way, which saves hours of furnace time, and so the logger goes on where it was.
import { spawn, spawnSync } from 'node:child_process';
import { openSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { COLD, furnaceLog } from '../../config/demo/furnace_logs.mjs';
import { schedule } from '../../config/demo/generate.mjs';
import { Daemon, MINUTE_MS, SOURCE, binary, check, expect, finish, freePort, iso, temporaryFolder, waitFor } from './support.mjs';

const BIN = binary();
const FURNACE = COLD.furnace;
const START_MS = Date.parse('2026-03-02T00:00:00Z');
const [HOURS, SEED] = [24, 2606];
const at = (minute) => iso(START_MS + minute * MINUTE_MS);
const minuteOf = (time) => (Date.parse(time) - START_MS) / MINUTE_MS;

const own = schedule(START_MS, HOURS).filter((one) => one.body.furnace === FURNACE);
const entry = own.find((one) => one.start_min < COLD.from_min && one.end_min > COLD.from_min);
const folder = temporaryFolder();
const port = await freePort();
const log = join(folder, `${FURNACE}.csv`);
const schedule_file = join(folder, 'schedule.json');
writeFileSync(schedule_file, JSON.stringify({
  start: at(0), end: at(HOURS * 60), seed: SEED, loads: own.map(({ body, ended_at }) => ({ body, ended_at })),
}));
const written = () => readFileSync(log, 'utf8');

let daemon;
let players = [];

function play(name, program, words) {
  const out = openSync(join(folder, `${name}.log`), 'a');
  const player = spawn(program, words, { stdio: ['ignore', out, out] });
  player.over = new Promise((tell) => player.once('exit', (code, signal) => tell(`${name} ended with ${code ?? signal}`)));
  players.push(player);
}

// The plant at work from `minute` on, one real second being `speed` seconds.
async function begin(minute, speed) {
  const clock = `[clock]\nspeed = ${speed}.0\nanchor_real = "${new Date().toISOString()}"\nanchor_data = "${at(minute)}"\n`;
  daemon = new Daemon(folder, port, clock);
  await daemon.start();
  const demo = (file) => join(SOURCE, 'config/demo', file);
  const common = ['--url', daemon.url, '--schedule', schedule_file];
  play('logger', process.execPath, [demo('logger.mjs'), ...common, '--furnace', FURNACE, '--file', log]);
  await waitFor('the logger to write', 40000, () => written().split('\n').length > minute);
  play('feed', BIN, ['feed', '--settings', daemon.settings, '--furnace', FURNACE, '--mapping', 'logger', '--file', log, '--follow']);
  play('people', process.execPath, [demo('play.mjs'), ...common]);
}

async function stop() {
  const leaving = players;
  players = [];
  for (const player of leaving) player.kill('SIGTERM');
  const ends = await Promise.all(leaving.map((player) => player.over));
  // SIGTERM itself ends one that had not yet begun to listen.
  expect(ends.every((end) => /with (0|SIGTERM)$/.test(end)), ends.join('; '));
  await daemon.stop();
}
process.on('exit', () => players.forEach((player) => player.kill('SIGKILL')));

const loads = async () => (await daemon.must('GET', `/api/v1/loads?furnace=${FURNACE}`)).loads;
const loadId = async () => (await loads()).find((one) => one.name === entry.body.name)?.id;
const base = async () => `/api/v1/loads/${await loadId()}`;
const snapshot = async () => daemon.must('GET', `${await base()}/snapshot`);
const outlookFrom = (what, minute, fits = () => true) => waitFor(what, 20000, async () => {
  const shown = await snapshot();
  return shown.outlook && minuteOf(shown.outlook.at) >= minute && minuteOf(shown.data_time) > minute - 3 && fits(shown) && shown;
});
async function projectedMiss() {
  const { alerts } = await daemon.must('GET', '/api/v1/alerts?state=active&limit=100');
  return alerts.find((one) => one.kind === 'projected miss' && one.load_name === entry.body.name);
}

await check('while the heater is well the load stands inside, with a chance of 85 % or more', async () => {
  await begin(COLD.from_min - 30, 30);
  const shown = await outlookFrom('an outlook', COLD.from_min - 30);
  expect(minuteOf(shown.outlook.at) < COLD.from_min, `too late: ${shown.outlook.at}`);
  expect(shown.outlook.joint_chance >= 0.85, `${shown.outlook.joint_chance}`);
  expect(shown.outlook.items.length === 3 && shown.outlook.items.every((item) => item.standing === 'inside'), JSON.stringify(shown.outlook.items));
  expect(!(await projectedMiss()), 'a projected miss is told already');
  await stop();
  expect(furnaceLog(FURNACE, own, START_MS, HOURS, SEED).startsWith(written()), 'the logger writes other rows than generate.mjs');
});

let miss = null;
await check('with it failed a miss is projected more than an hour before the end, and told', async () => {
  await begin(300, 60);
  const shown = await outlookFrom('a cold furnace', 300, (one) => one.outlook.offset.temperature_k < -20);
  const fallen = shown.outlook.offered_joint_chance - shown.outlook.joint_chance;
  expect(fallen > 0.25 && shown.outlook.joint_chance < 0.6, `joint chance ${shown.outlook.joint_chance}`);
  expect(shown.outlook.items.every((item) => item.standing !== 'deep'), JSON.stringify(shown.outlook.items));
  expect(minuteOf(shown.outlook.ends_at) - minuteOf(shown.outlook.at) > 60, `ends ${shown.outlook.ends_at}`);
  miss = await waitFor('the alert', 15000, projectedMiss);
  expect(minuteOf(miss.since) <= entry.end_min - 60, `since ${miss.since}`);
  console.log(`     ${miss.sentence} (since ${miss.since}, load ends ${entry.ended_at})`);
  expect(miss.advice && minuteOf(shown.now) <= entry.end_min - 60, JSON.stringify(miss));
});

let proposal;
await check('the proposal finds a plan that a person can adopt before the next load comes', async () => {
  // A plan that the confirming members see a hair below 90 % is not found; a minute later another one is.
  proposal = await waitFor('a proposal', 40000, async () => {
    const answer = await daemon.request('POST', `${await base()}/proposal`, { asked_chance: 0.9 });
    if (answer.status !== 200) throw new Error(answer.text);
    if (!answer.json.found) throw new Error(answer.json.sentence);
    return answer.json;
  });
  console.log(`     ${proposal.sentence}`);
  expect(proposal.confirmed.joint_chance >= 0.9, JSON.stringify(proposal.confirmed));
  const next = own[own.indexOf(entry) + 1];
  const room_min = next.start_min - entry.end_min;
  expect(proposal.minutes_more > 15 && proposal.minutes_more < room_min, `${proposal.minutes_more} min longer, ${room_min} are free`);
});

let plan;
let adopted_min;
await check('adopted by a named person it stands inside again; what was before is unchanged', async () => {
  const path = await base();
  const history = () => daemon.must('GET', `${path}/history`);
  const before = await history();
  const body = { person: 'Visitor', reason: 'Invented: heater leg out.', expected_revision: proposal.revision, segments: proposal.segments };
  const stale = await daemon.request('POST', `${path}/plan`, { ...body, expected_revision: proposal.revision + 7 });
  expect(stale.status === 409, `another revision: ${stale.status} ${stale.text}`);
  await daemon.must('POST', `${path}/plan`, body);
  const shown = await outlookFrom('the plan', 300, (one) => one.plans.length === 1 && minuteOf(one.outlook.at) >= minuteOf(one.plans[0].at));
  [plan] = shown.plans;
  adopted_min = minuteOf(plan.at);
  expect(plan.person === 'Visitor' && shown.load.recipe.segments.length === 4, JSON.stringify(shown.plans));
  expect(shown.outlook.joint_chance >= 0.85, `joint chance ${shown.outlook.joint_chance} after it`);
  const after = await history();
  // What the newest readings settle is not yet past.
  const settled = before.time_s.filter((time_s) => time_s * 1000 <= START_MS + (adopted_min - 10) * MINUTE_MS);
  expect(settled.length > 50, `${settled.length} points to compare`);
  settled.forEach((time_s, i) => {
    expect(after.time_s[i] === time_s, `time ${time_s} became ${after.time_s[i]}`);
    before.items.forEach((item, n) => expect(item.case_depth_mm[i] === after.items[n].case_depth_mm[i],
      `${item.name} at ${time_s} s: ${item.case_depth_mm[i]} became ${after.items[n].case_depth_mm[i]}`));
  });
});

await check('within 20 minutes of furnace time the miss is gone', async () => {
  const limit_ms = START_MS + (adopted_min + 20) * MINUTE_MS;
  const past = await waitFor('the alert to clear', 30000, async () => {
    const alert = await daemon.must('GET', `/api/v1/alerts/${miss.id}`);
    return alert.state === 'past' && alert;
  });
  console.log(`     adopted ${plan.at}, cleared ${past.cleared_at}`);
  expect(Date.parse(past.cleared_at) <= limit_ms, `cleared ${past.cleared_at}, adopted ${plan.at}`);
  const shown = await outlookFrom('the furnace on the plan', adopted_min + 10);
  expect(Date.parse(shown.outlook.at) <= limit_ms, `only at ${shown.outlook.at}`);
  expect(shown.outlook.joint_chance >= 0.8, `joint chance ${shown.outlook.joint_chance}`);
});

await check('an hour later, the furnace as cold as before, no miss is projected', async () => {
  await waitFor('the logger to follow', 10000, () => readFileSync(join(folder, 'logger.log'), 'utf8').includes('adopted plan'));
  await stop();
  await begin(adopted_min + 60, 60);
  const shown = await outlookFrom('an outlook', adopted_min + 60, (one) => one.outlook.offset.temperature_k < -20);
  console.log(`     joint chance ${shown.outlook.joint_chance.toFixed(2)}`);
  expect(shown.outlook.joint_chance >= 0.8 && !(await projectedMiss()), `joint chance ${shown.outlook.joint_chance}`);
});

await check('the logger goes on where it was, on the plan', async () => {
  await stop();
  const before = written();
  await begin(adopted_min + plan.segments.reduce((sum, one) => sum + one.duration_min, 0) - 6, 120);
  expect(written().startsWith(before), 'rows that were there have changed');
  const rows = written().trimEnd().split('\n');
  const planless = furnaceLog(FURNACE, own, START_MS, HOURS, SEED).split('\n');
  const boost_end_min = entry.start_min + entry.body.recipe.segments.slice(0, 2).reduce((sum, one) => sum + one.duration_min, 0);
  expect(Number(planless[1 + boost_end_min + 30].split(',')[3]) < 0.95, 'the recipe has no diffuse there');
  const meant = plan.segments[0].carbon_potential_wt_pct;
  const shown = Number(rows[1 + boost_end_min + 30].split(',')[3]);
  expect(Math.abs(shown - meant) < 0.04, `the plan asks for ${meant} % C; the gas is not the plan's: ${rows[1 + boost_end_min + 30]}`);
});

await check('at the end of the plan the people take the load out, and every case depth is inside its window', async () => {
  const end_min = adopted_min + plan.segments.reduce((sum, one) => sum + one.duration_min, 0);
  const result = await waitFor('the final result', 20000, async () => {
    const document = await daemon.must('GET', `${await base()}/result`);
    return document.final && document;
  });
  expect(Math.abs(minuteOf(result.ended_at) - end_min) < 0.01, `out at ${result.ended_at}, the plan ends ${at(end_min)}`);
  result.items.forEach((item, i) => {
    const [low, high] = entry.body.items[i].case_depth_window_mm;
    console.log(`     ${item.name}: ${item.case_depth_mm.toFixed(3)} mm, window ${low} to ${high}`);
    expect(item.case_depth_mm >= low && item.case_depth_mm <= high, `${item.name}: ${item.case_depth_mm}`);
  });
  await stop();
});

await check('without the plan the load would have come out worse', () => {
  const load = join(folder, 'load.json');
  const planless = join(folder, 'planless.csv');
  writeFileSync(load, JSON.stringify({ ...entry.body, ended_at: entry.ended_at }));
  writeFileSync(planless, furnaceLog(FURNACE, own, START_MS, HOURS, SEED));
  const answer = spawnSync(BIN, ['replay', '--plant', join(SOURCE, 'config/demo/plant.toml'), '--steels', join(SOURCE, 'config/steels.toml'),
    '--load', load, '--log', planless, '--mapping', 'logger', '--json'], { encoding: 'utf8', maxBuffer: 1 << 26, timeout: 60000 });
  expect(answer.status === 0, answer.stderr);
  for (const item of JSON.parse(answer.stdout).items) expect(item.joint_chance < 0.65, `${item.name}: ${item.joint_chance}`);
});

finish();
