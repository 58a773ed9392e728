// Invariant 1, acknowledged means durable: the daemon is killed (SIGKILL) at random instants while several
// senders post, and started again. At the end the sqlite3 command, not our own code, says that every acknowledged
// reading is there, once, with its value. What was sent without an answer is sent again, as a gateway would.
import { Daemon, binary, check, expect, finish, iso, seededRandom, sleep } from './support.mjs';

binary();
const KILLS = Number(process.env.KILLS ?? 20);
const SENDERS = 4;
const random = seededRandom();
const base_ms = Math.floor(Date.now() / 1000) * 1000 - 20 * 86400000;

// Each sender has a furnace channel and a stretch of time of its own: what it sent is known from its counter.
const CHANNELS = [['pit-2', 'temperature', 1], ['batch-4', 'carbon_potential', 0.001], ['batch-5', 'load_temperature', 1],
  ['pit-2', 'probe_emf', 1]];
const valueAt = (sender, index) => Number((((index * 7 + sender * 131) % 900) * CHANNELS[sender][2]).toFixed(3));
const timeAt = (index) => base_ms + index * 1000;

const acknowledged = CHANNELS.map(() => 0); // readings 0 .. n-1 of the sender are acknowledged
let doubled = 0;

function batchOf(sender, count) {
  const [furnace, channel] = CHANNELS[sender];
  return Array.from({ length: count }, (_, i) => {
    const index = acknowledged[sender] + i;
    return { furnace, channel, time: iso(timeAt(index)), value: valueAt(sender, index) };
  });
}

let asCsv = 0;
async function send(daemon, sender, count) {
  const readings = batchOf(sender, count);
  let answer;
  if (sender === 3) { // one sender delivers a logger file instead
    asCsv++;
    const rows = readings.map((one) => `${one.time},${one.value},,`).join('\n');
    answer = await daemon.request('POST', '/api/v1/furnaces/pit-2/log?mapping=logger', `time,emf_mV,CO_pct,temp_C\n${rows}\n`, 'text/csv');
  } else {
    answer = await daemon.request('POST', '/api/v1/readings', { readings });
  }
  if (answer.status === 503) return false;
  expect(answer.status === 200, `${answer.status} ${answer.text.slice(0, 300)}`);
  const { stored, duplicate, conflict, refused } = answer.json;
  expect(stored + duplicate === count && conflict + refused === 0, `counts ${JSON.stringify(answer.json).slice(0, 300)}`);
  acknowledged[sender] += count;
  doubled += duplicate;
  return true;
}

const daemon = await Daemon.fresh();

await check(`${KILLS} kills while ${SENDERS} connections send: each restart serves again`, async () => {
  for (let round = 0; round < KILLS; round++) {
    let killed = false;
    const faults = [];
    const senders = CHANNELS.map(async (_, sender) => {
      while (!killed) {
        try {
          await send(daemon, sender, 1 + Math.floor(random() * 120));
        } catch (error) {
          // A broken connection is what a kill looks like; anything else is a fault of the daemon.
          if (!(error instanceof TypeError) && error.name !== 'AbortError' && error.name !== 'TimeoutError') faults.push(error);
          if (!killed) await sleep(2);
        }
      }
    });
    await sleep(20 + random() * 400);
    const ending = daemon.kill9();
    killed = true;
    await Promise.all([ending, ...senders]);
    expect(faults.length === 0, `round ${round}: ${faults[0]?.message}`);
    await daemon.start();
  }
});

await check('what was under way at the last kill can be sent again', async () => {
  for (let sender = 0; sender < SENDERS; sender++) expect(await send(daemon, sender, 200), 'refused');
});

await check('the daemon stops by itself on SIGTERM, with code 0', async () => {
  const end = await daemon.stop();
  expect(end.code === 0, JSON.stringify(end));
});

const total = acknowledged.reduce((sum, count) => sum + count, 0);
console.log(`${total} readings acknowledged (${asCsv} log files), ${doubled} of them found to be there already`);

await check('sqlite3: integrity_check and foreign_key_check are clean', () => {
  expect(daemon.sql('PRAGMA integrity_check') === 'ok', 'integrity');
  expect(daemon.sql('PRAGMA foreign_key_check') === '', 'foreign keys');
});

await check('sqlite3: every acknowledged reading is stored once with its value, and nothing else is', () => {
  expect(total > KILLS * SENDERS, `only ${total} readings were acknowledged: nothing was tested`);
  CHANNELS.forEach(([furnace, channel], sender) => {
    const rows = daemon.sql(`SELECT time_us, value FROM reading WHERE channel = (SELECT id FROM channel ` +
      `WHERE furnace = '${furnace}' AND name = '${channel}') ORDER BY time_us`).split('\n');
    const index = new Map();
    for (const row of rows) {
      const [time_us, value] = row.split('|');
      expect(!index.has(time_us), `${furnace} ${channel}: two rows at ${time_us}`);
      index.set(time_us, Number(value));
    }
    for (let i = 0; i < acknowledged[sender]; i++) {
      const stored = index.get(String(timeAt(i) * 1000));
      expect(stored === valueAt(sender, i), `${furnace} ${channel}: reading ${i} is ${stored}, sent ${valueAt(sender, i)}`);
    }
    // All batches were acknowledged in the end, so there can be no more rows than that.
    expect(rows.length === acknowledged[sender], `${furnace} ${channel}: ${rows.length} rows, ${acknowledged[sender]} sent`);
  });
});

await check('sqlite3: the counts kept beside the readings agree with them', () => {
  const wrong = daemon.sql('SELECT furnace, name, stored, (SELECT count(*) FROM reading WHERE channel = channel.id) AS rows_there ' +
    'FROM channel WHERE stored <> rows_there');
  expect(wrong === '', wrong);
});

finish();
