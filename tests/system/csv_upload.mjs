// A logger file that the plant file does not know, from its first look to stored readings, on the real daemon: proposed,
// previewed, saved as a mapping, uploaded, uploaded again, the mapping changed, and all of it after a restart.
import { Daemon, check, expect, finish } from './support.mjs';

const daemon = await Daemon.fresh();
const furnace = '/api/v1/furnaces/pit-2';
const octets = 'application/octet-stream';
const MINUTE = 60000;

// Local time of Berlin, as a logger there shows it: Windows-1252, decimal commas, °F, title and names again in the middle.
const start = Math.floor(Date.now() / MINUTE) * MINUTE - 300 * MINUTE;
const berlin = new Intl.DateTimeFormat('de-DE', { timeZone: 'Europe/Berlin', dateStyle: 'short', timeStyle: 'medium' });
const row = (m) => `${berlin.format(start + m * MINUTE).replace(',', '')};${(1700 + m / 10).toFixed(1).replace('.', ',')};${m === 3 ? '----' : '1105,5'}`;
const head = 'Invented logger\r\nZeit;Ofen °F;Sonde mV\r\n';
const text = head + Array.from({ length: 10 }, (_, m) => row(m)).join('\r\n') + '\r\n' + head +
  Array.from({ length: 10 }, (_, m) => row(10 + m)).join('\r\n') + '\r\n';
const file = new Uint8Array([...text].map((c) => c.charCodeAt(0)));
const rows = () => Number(daemon.sql('SELECT count(*) FROM reading'));

let mapping;
await check('a proposal names columns, units and signs, and says that the zone is not known', async () => {
  const guess = await daemon.must('POST', `${furnace}/log/guess`, file, octets);
  mapping = guess.mapping;
  expect(mapping.separator === ';' && mapping.decimal === ',' && mapping.header_lines === 2, JSON.stringify(mapping));
  expect(mapping.columns.map((c) => `${c.column}>${c.channel}>${c.unit}`).join() === 'Ofen °F>temperature>degF,Sonde mV>probe_emf>null', JSON.stringify(mapping.columns));
  expect(guess.unsure.some((each) => each.field === 'time_zone'), JSON.stringify(guess.unsure));
  expect(rows() === 0, 'a proposal stores nothing');
});

await check('a preview shows instants, local times, converted values and totals, and stores nothing', async () => {
  mapping.time_zone = 'Europe/Berlin';
  mapping.utc_offset_min = null;
  const line = new TextEncoder().encode(`${JSON.stringify(mapping)}\n`);
  const body = new Uint8Array([...line, ...file]);
  const preview = await daemon.must('POST', `${furnace}/log/preview`, body, octets);
  expect(preview.fits && preview.problem === null, JSON.stringify(preview.problem));
  expect(preview.rows[0].time === new Date(start).toISOString().replace('.000Z', 'Z'), JSON.stringify(preview.rows[0]));
  expect(/ CES?T$/.test(preview.rows[0].local), preview.rows[0].local);
  expect(Math.abs(preview.rows[0].values[0].value - (1700 - 32) / 1.8) < 1e-9, JSON.stringify(preview.rows[0]));
  const { totals } = preview;
  expect(totals.rows === 20 && totals.readings === 39 && totals.no_value === 1 && totals.repeated_headers === 2 && totals.interval_s === 60, JSON.stringify(totals));
  expect(rows() === 0, 'a preview stores nothing');
});

await check('before it is saved an upload by its name is refused', async () => {
  const answer = await daemon.request('POST', `${furnace}/log?mapping=berlin`, file, octets);
  expect(answer.status === 422 && answer.json.type === '/problems/unknown-mapping', answer.text);
});

await check('saved, it imports the file; again, it changes nothing', async () => {
  const saved = await daemon.must('PUT', `${furnace}/mappings/berlin`, { person: 'Early shift', mapping, expected_version: 0 });
  expect(saved.version === 1 && saved.source === 'library' && !saved.replaces_plant_file, JSON.stringify(saved));
  const report = await daemon.must('POST', `${furnace}/log?mapping=berlin`, file, octets);
  expect(report.stored === 39 && report.no_value === 1 && report.refused === 0, JSON.stringify(report));
  const again = await daemon.must('POST', `${furnace}/log?mapping=berlin`, file, octets);
  expect(again.stored === 0 && again.duplicate === 39, JSON.stringify(again));
  const kept = await daemon.must('GET', `${furnace}/readings?channel=temperature`);
  expect(kept.time_s[0] * 1000 === start && kept.time_s.length === 20, JSON.stringify(kept).slice(0, 200));
});

await check('what does not fit is refused whole and leaves nothing behind', async () => {
  const before = rows();
  const answer = await daemon.request('POST', `${furnace}/log?mapping=berlin`, file.subarray(0, 30), octets);
  expect(answer.status === 422 && answer.json.type === '/problems/bad-csv' && answer.json.detail.includes('line 2'), answer.text);
  expect(rows() === before, 'rows came in');
});

await check('a mapping of one that the furnace does not have, or of an old version, is refused with its field', async () => {
  const wrong = { ...mapping, columns: [{ ...mapping.columns[0], channel: 'temprature' }] };
  const answer = await daemon.request('PUT', `${furnace}/mappings/berlin`, { person: 'Early shift', mapping: wrong, expected_version: 1 });
  expect(answer.status === 422 && answer.json.field === 'mapping.columns[0].channel', answer.text);
  const old = await daemon.request('PUT', `${furnace}/mappings/berlin`, { person: 'Early shift', mapping, expected_version: 0 });
  expect(old.status === 409 && old.json.type === '/problems/mapping-changed', old.text);
});

await check('a saved mapping goes before the plant file\'s of the same name, says so, and is there after a restart', async () => {
  const own = { ...mapping, columns: [mapping.columns[0]] };
  await daemon.must('PUT', `${furnace}/mappings/logger`, { person: 'Early shift', mapping: own, expected_version: 0 });
  await daemon.must('PUT', `${furnace}/mappings/logger`, { person: 'Late shift', mapping, expected_version: 1 });
  expect((await daemon.stop()).code === 0, 'stop');
  await daemon.start();
  const { mappings } = await daemon.must('GET', `${furnace}/mappings`);
  const logger = mappings.find((each) => each.name === 'logger');
  expect(mappings.length === 2 && logger.replaces_plant_file && logger.version === 2 && logger.person === 'Late shift', JSON.stringify(mappings).slice(0, 300));
  const report = await daemon.must('POST', `${furnace}/log?mapping=logger`, file, octets);
  expect(report.duplicate === 39, JSON.stringify(report));
  expect(Number(daemon.sql("SELECT count(*) FROM audit WHERE action = 'save logger mapping'")) === 3, 'audit');
});

await daemon.stop();
finish();
