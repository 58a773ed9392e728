// Invariant 3, a guessed input is never shown as a measured one: 25 minutes of a log are missing (batch-4, from
// 06:10 of the invented day). The snapshot says `held`, then `planned`, and the result names the stretch.
// Limits as in plant.h: a reading speaks for 300 s, is held until 600 s, then the recipe is assumed.
import { Daemon, MINUTE_MS, binary, check, demoDay, expect, finish, iso, replay, temporaryFolder, waitFor } from './support.mjs';
import { GAP } from '../../config/demo/furnace_logs.mjs';

binary();
const HOURS = 10;
const LAST_READING_MIN = GAP.from_min - 1 + 12 / 60; // the logger writes at second 12
const now_ms = Math.floor(Date.now() / 1000) * 1000;

// A daemon that sees, now, the log up to the gap as `age_min` minutes old.
async function inTheGap(age_min) {
  const start_ms = now_ms - Math.round((LAST_READING_MIN + age_min) * MINUTE_MS);
  const { loads, logs } = demoDay(start_ms, HOURS);
  const entry = loads.find((one) => one.body.furnace === GAP.furnace && one.start_min < GAP.from_min && one.end_min > GAP.to_min);
  const log = logs[GAP.furnace];
  const daemon = await Daemon.fresh();
  await daemon.sendLog(GAP.furnace, log.header + log.rows.slice(0, GAP.from_min).join('\n') + '\n');
  const load = await daemon.must('POST', '/api/v1/loads', entry.body);
  return { daemon, load, entry };
}

for (const [age_min, basis] of [[2, 'measured'], [8, 'held'], [17, 'planned']]) {
  await check(`${age_min} min after the last reading the snapshot says ${basis}`, async () => {
    const { daemon, load, entry } = await inTheGap(age_min);
    // 503 until the model has caught up with the load that was just put in.
    const answer = await waitFor('the snapshot', 10000, async () => {
      const got = await daemon.request('GET', `/api/v1/loads/${load.id}/snapshot`);
      return got.status !== 503 && got;
    });
    expect(answer.status === 200, answer.text);
    const snapshot = answer.json;
    for (const input of ['temperature', 'carbon_potential']) {
      expect(snapshot.inputs[input].basis === basis, `${input}: ${JSON.stringify(snapshot.inputs[input])}`);
    }
    const age_s = snapshot.data_age_s;
    expect(Math.abs(age_s - age_min * 60) < 60, `data_age_s ${age_s}`);
    const condition = age_min * 60 > 300 ? 'stale' : 'live';
    expect(snapshot.condition === condition, `condition ${snapshot.condition}, expected ${condition}`);
    if (basis !== 'measured') expect(typeof snapshot.message === 'string' && snapshot.message.length > 10, 'no sentence for the operator');
    if (basis === 'planned') {
      const boost = entry.body.recipe.segments.find((segment) => segment.name === 'boost');
      expect(Math.abs(snapshot.inputs.carbon_potential.value_wt_pct - boost.carbon_potential_wt_pct) < 1e-6,
        `planned value ${snapshot.inputs.carbon_potential.value_wt_pct}`);
    }
    await daemon.stop();
  });
}

await check('the result of the finished load lists the stretch as held, then planned, and counts its seconds', async () => {
  const start_ms = now_ms - (HOURS + 1) * 60 * MINUTE_MS;
  const { loads, logs } = demoDay(start_ms, HOURS);
  const entry = loads.find((one) => one.body.furnace === GAP.furnace && one.start_min < GAP.from_min && one.end_min > GAP.to_min);
  const text = replay(temporaryFolder(), entry, logs[GAP.furnace].text);
  const result = JSON.parse(text);
  const at = (minute) => start_ms + minute * MINUTE_MS;
  const close = (time, minute) => Math.abs(Date.parse(time) - at(minute)) <= 61000; // to the lattice of 60 s
  const first_after = GAP.to_min + 12 / 60;
  for (const input of ['temperature', 'carbon_potential']) {
    const own = result.gaps.filter((gap) => gap.input === input);
    const held = own.find((gap) => gap.basis === 'held');
    const planned = own.find((gap) => gap.basis === 'planned');
    expect(own.length === 2 && held && planned, `${input}: ${JSON.stringify(own)}`);
    expect(close(held.from, LAST_READING_MIN + 5) && close(held.to, LAST_READING_MIN + 10),
      `held ${held.from} to ${held.to}, last reading ${iso(at(LAST_READING_MIN))}`);
    expect(close(planned.from, LAST_READING_MIN + 10) && close(planned.to, first_after), `planned ${planned.from} to ${planned.to}`);
    const counted = result.inputs[input];
    const duration_s = (entry.end_min - entry.start_min) * 60;
    expect(counted.measured_s + counted.held_s + counted.planned_s === duration_s, JSON.stringify(counted));
    expect(Math.abs(counted.held_s - 300) <= 120, `held_s ${counted.held_s}`);
    expect(Math.abs(counted.planned_s - (first_after - LAST_READING_MIN - 10) * 60) <= 120, `planned_s ${counted.planned_s}`);
  }
});

await check('a log without gap has none in its result', () => {
  const start_ms = now_ms - (HOURS + 1) * 60 * MINUTE_MS;
  const { loads, logs } = demoDay(start_ms, HOURS);
  const entry = loads.find((one) => one.body.furnace === GAP.furnace && one.end_min < GAP.from_min);
  const result = JSON.parse(replay(temporaryFolder(), entry, logs[GAP.furnace].text));
  expect(result.gaps.length === 0, JSON.stringify(result.gaps));
  expect(result.inputs.temperature.planned_s === 0 && result.inputs.temperature.held_s === 0, JSON.stringify(result.inputs));
});

finish();
