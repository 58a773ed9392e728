// The demo's log writer by itself: figures against published ones, and the same bytes each time. Needs no binary.
import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { carbonActivity, probeEmf_mV } from '../../config/demo/gas.mjs';
import { COLD, GAP, LATE } from '../../config/demo/furnace_logs.mjs';
import { FURNACES, SOURCE, check, demoDay, expect, finish, temporaryFolder } from './support.mjs';

const START = Date.parse('2026-03-02T00:00:00Z');

// Gustafson 1985 with the Nernst equation, worked by hand for 20 % CO and 1 atm: wt% C, degC, mV.
for (const [carbon, temperature, wanted] of [[0.4, 927, 1095.2], [0.8, 927, 1139.0], [1.1, 927, 1161.5],
  [0.8, 930, 1139.8], [1.0, 930, 1155.4], [1.2, 930, 1168.9]]) {
  await check(`a probe at ${temperature} °C reads ${wanted} mV in a gas of ${carbon} % carbon potential`, () => {
    const emf = probeEmf_mV(carbon, 0.2, temperature);
    expect(Math.abs(emf - wanted) < 0.06, `${emf.toFixed(2)} mV`);
  });
}

await check('more CO at the same carbon potential needs less voltage (33.3 % CO, 0.8 %, 930 °C: 1113.3 mV)', () => {
  expect(Math.abs(probeEmf_mV(0.8, 0.333, 930) - 1113.3) < 0.2, `${probeEmf_mV(0.8, 0.333, 930)}`);
});

// Gustafson 1985 as quoted in public listings: 0.5317 at 927 °C and 0.8 wt% C.
await check('carbon activity is 0.5317 at 927 °C and 0.8 % carbon', () => {
  expect(Math.abs(carbonActivity(0.8, 1200.15) - 0.5317) < 1e-4, `${carbonActivity(0.8, 1200.15)}`);
});

const write = (folder, seed) => spawnSync('node', [join(SOURCE, 'config/demo/generate.mjs'), '--out', folder,
  '--hours', '30', '--seed', seed], { encoding: 'utf8' });
const files = ['schedule.json', ...FURNACES.map((furnace) => `${furnace}.csv`)];

await check('the same seed and start write the same bytes, another seed others', () => {
  const [one, two, three] = [temporaryFolder(), temporaryFolder(), temporaryFolder()];
  for (const [folder, seed] of [[one, '7'], [two, '7'], [three, '8']]) {
    const answer = write(folder, seed);
    expect(answer.status === 0, answer.stderr);
  }
  const read = (folder, file) => readFileSync(join(folder, file), 'utf8');
  for (const file of files) expect(read(one, file) === read(two, file), `${file} differs`);
  expect(read(one, 'pit-2.csv') !== read(three, 'pit-2.csv'), 'the seed changes nothing');
});

await check('wrong words are told and end with code 2', () => {
  const answer = spawnSync('node', [join(SOURCE, 'config/demo/generate.mjs'), '--hours', 'many', '--out', '.'], { encoding: 'utf8' });
  expect(answer.status === 2 && answer.stderr.includes('--hours'), `${answer.status} ${answer.stderr}`);
});

const { loads, logs } = demoDay(START, 24);

await check('no two loads are in one furnace at one time', () => {
  for (const furnace of FURNACES) {
    const own = loads.filter((entry) => entry.body.furnace === furnace);
    expect(own.length >= 3, `${furnace} has ${own.length} loads`);
    for (let i = 1; i < own.length; i++) expect(own[i].start_min > own[i - 1].end_min, `${furnace} ${own[i].body.name}`);
  }
});

await check('the gap and the late block are where the header of the writer says', () => {
  const gap = logs[GAP.furnace].rows.filter((row) => /^02\.03\.2026 07:(1\d|2\d|3[0-4]):/.test(row)); // local time
  expect(gap.length === 0, `${gap.length} rows in the gap`);
  const rows = logs[LATE.furnace].rows;
  const at = (time) => rows.findIndex((row) => row.startsWith(`2026-03-02T${time}:00Z`));
  expect(at('10:30') > at('10:58') && at('10:50') < at('10:59'), `${at('10:30')} ${at('10:58')} ${at('10:59')}`);
  expect(new Set(rows.map((row) => row.slice(0, 20))).size === 1440, 'a minute is missing or doubled');
});

const undisturbed = loads.find((one) => one.body.furnace === COLD.furnace && one.start_min >= COLD.to_min);

await check('furnaces hold temperature and carbon potential in the boost as a shop would expect', () => {
  const entry = undisturbed;
  const [heat, boost] = entry.body.recipe.segments;
  const rows = logs['batch-5'].rows.slice(entry.start_min + heat.duration_min + 60, entry.start_min + heat.duration_min + boost.duration_min);
  const mean = (column) => rows.reduce((sum, row) => sum + Number(row.split(',')[column]), 0) / rows.length;
  expect(Math.abs(mean(1) - boost.temperature_degc) < 2, `control ${mean(1)}`);
  expect(Math.abs(mean(3) - boost.carbon_potential_wt_pct) < 0.02, `carbon ${mean(3)}`);
  const spread = Math.sqrt(rows.reduce((sum, row) => sum + (Number(row.split(',')[1]) - mean(1)) ** 2, 0) / rows.length);
  expect(spread > 0.3 && spread < 4, `hunting ${spread} K`);
});

await check('the load thermocouple starts cold, lags the furnace and is silent between loads', () => {
  const entry = undisturbed;
  const at = (minute) => logs['batch-5'].rows[minute].split(',').map(Number);
  expect(logs['batch-5'].rows[entry.start_min - 5].split(',')[2] === '', 'a value between loads');
  expect(at(entry.start_min)[2] < 120, 'the load is hot at once');
  expect(at(entry.start_min + 30)[1] - at(entry.start_min + 30)[2] > 80, 'no lag after half an hour');
  expect(Math.abs(at(entry.start_min + 180)[1] - at(entry.start_min + 180)[2]) < 8, 'still cold after three hours');
});

await check('the failing heater sinks slowly to what it can hold, while the gas stays', () => {
  const entry = loads.find((one) => one.body.furnace === COLD.furnace && one.start_min < COLD.from_min);
  const [heat, boost] = entry.body.recipe.segments;
  expect(entry.end_min < COLD.to_min && entry.start_min + heat.duration_min < COLD.from_min, 'the trouble is not in its boost');
  const mean = (minute, column) => logs[COLD.furnace].rows.slice(minute - 5, minute + 5)
    .reduce((sum, row) => sum + Number(row.split(',')[column]) / 10, 0);
  expect(Math.abs(mean(COLD.from_min - 10, 1) - boost.temperature_degc) < 3, `${mean(COLD.from_min - 10, 1)} °C before`);
  // Gas furnaces cool by some tens of kelvin an hour when part of the heating is out: from memory.
  expect(Math.abs(mean(COLD.from_min + 30, 1) - (boost.temperature_degc - 18)) < 5, `${mean(COLD.from_min + 30, 1)} °C after half an hour`);
  for (const minute of [COLD.from_min + 80, COLD.from_min + 190]) {
    expect(Math.abs(mean(minute, 1) - COLD.holds_degc) < 3, `${mean(minute, 1)} °C at ${minute}`);
    expect(Math.abs(mean(minute, 3) - boost.carbon_potential_wt_pct) < 0.03, `${mean(minute, 3)} % C at ${minute}`);
  }
});

finish();
