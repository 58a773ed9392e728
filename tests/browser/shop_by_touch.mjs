// A shift at the two-chamber furnace of a demo plant, by touch on a tablet: start a load from "Start again",
// correct its steel, move it to the other chamber, mark a burn-off, choose between conflicting values, end it.
//
//   node shop_by_touch.mjs [http://127.0.0.1:8473] [folder for screenshots]
//
// Without an address it starts a daemon of its own (HEARTHFRONT_BIN) on the demo plant. One that is named must be a
// DEMO plant with the furnace "twin-6": its open loads are ended, readings of the last hours are posted.
// Exit code 0 when every check passed; the last line counts them.
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Daemon } from '../system/support.mjs';
import { attempt, check, openBrowser, sizes, sound, verdict } from './harness.mjs';

const own = process.argv[2] ? null : await Daemon.fresh();
const [base = own.url, folder = join(tmpdir(), 'hearthfront-screens')] = process.argv.slice(2);
const furnace = 'twin-6', person = 'Touch test', minuteMs = 60_000, patient = { timeout: 60_000 };
const iso = (ms) => `${new Date(ms).toISOString().slice(0, 19)}Z`;
async function api(path, body, method = body ? 'POST' : 'GET') {
  const answer = await fetch(new URL(`/api/v1/${path}`, base), { method, ...(body ? { headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) } : {}) });
  if (!answer.ok) throw new Error(`${method} ${path}: ${answer.status} ${await answer.text()}`);
  return answer.json();
}
const number = String(Date.now()).slice(-6), earlier = `E${number}`, name = `S${number}`;

// An earlier load to start again from, readings behind it, and two times with two values each.
async function prepare() {
  const floor = await api('floor'), now = Date.parse(floor.now);
  if (!floor.demo) throw new Error('Not a demo plant: nothing is touched.');
  for (const load of floor.furnaces.find((each) => each.id === furnace).loads) await api(`loads/${load.id}/end`, { person });
  const document = await api(`furnaces/${furnace}`);
  const unit = document.channels.find((each) => each.name === 'heating_temperature').unit;
  const heat = (degc) => (unit === 'degF' ? degc * 1.8 + 32 : degc);
  const readings = [];
  for (let ago = 120; ago > 1; --ago) {
    const time = iso(Math.floor((now - ago * minuteMs) / minuteMs) * minuteMs + 17_000);  // a second of its own, beside what the demo sends
    readings.push({ furnace, channel: 'heating_temperature', time, value: heat(930) }, { furnace, channel: 'second_temperature', time, value: heat(850) },
      { furnace, channel: 'heating_carbon', time, value: 1.08 }, { furnace, channel: 'second_carbon', time, value: 0.78 });
    if (ago === 40 || ago === 41) readings.push({ furnace, channel: 'heating_carbon', time, value: 1.16 });
  }
  await api('readings', { readings });
  const [steel, other] = (await api('steels')).steels.map((each) => each.id);
  const made = await api('loads', { name: earlier, furnace, chamber: 'heating', person, started_at: iso(now - 90 * minuteMs),
    recipe: { name: `touch ${number}`, segments: [{ name: 'boost', duration_min: 180, temperature_degc: 930, carbon_potential_wt_pct: 1.1 }, { name: 'diffuse', duration_min: 60, temperature_degc: 930, carbon_potential_wt_pct: 0.8 }] },
    items: [{ name: 'A', part: `test gear ${number}`, quantity: 12, steel, section: { shape: 'plate', thickness_mm: 20 }, criterion: { kind: 'hardness_hv', limit_hv: 550, martensite_pct: 95 }, case_depth_window_mm: [0.7, 0.9] }] });
  await api(`loads/${made.id}/end`, { person });
  return { other };
}

const browser = await openBrowser(base, folder);
const seen = await browser.page(sizes[1]);
const { page } = seen;
const at = (id) => page.locator(`[data-testid="${id}"]`);
const field = (path) => page.locator(`[data-path="${path}"]`);
const go = (hash) => page.goto(new URL(`/#${hash}`, base).href);
let loadHash = '', otherSteel = '';

await attempt('prepare', async () => { otherSteel = (await prepare()).other; check('prepare: an earlier load and its readings are there', true); });

await attempt('start again', async () => {
  await go(`/start?furnace=${furnace}`);
  const since = Date.now();
  await at('again').filter({ hasText: earlier }).tap(patient);
  await at('again-taken').waitFor(patient);
  check('start again: the item is filled in', await field('items[0].part').inputValue() === `test gear ${number}`);
  check('start again: the chamber is the earlier one', await field('chamber').inputValue() === 'heating');
  await sound('start again', seen);
  await browser.photo(page, 'tablet-start-again');
  await field('name').fill(name);
  await field('person').fill(person);
  const box = await at('start-submit').boundingBox();
  check('start again: the button is in sight without scrolling', box !== null && box.y + box.height <= sizes[1].height, box?.y);
  await at('start-submit').tap();
  await page.waitForURL(/#\/load\/\d+$/, patient);
  await page.locator('section.present').waitFor(patient);
  loadHash = new URL(page.url()).hash.slice(1);
  check('start again: open under its number', (await page.locator('h1').first().textContent()).includes(name));
  check('start again: well under half a minute', Date.now() - since < 30_000, Date.now() - since);
});

await attempt('correct', async () => {
  await at('correct').tap();
  await field('items[0].steel').waitFor(patient);
  await field('items[0].steel').locator(`option[value="${otherSteel}"]`).waitFor({ state: 'attached', ...patient });
  await field('items[0].steel').selectOption(otherSteel);
  await field('reason').fill('Wrong steel on the card');
  await field('correction.person').fill(person);
  await sound('correct', seen);
  await browser.photo(page, 'tablet-correct');
  await at('correct-submit').tap();
  await page.waitForURL((url) => url.hash === `#${loadHash}`, patient);
  await page.locator('section.present h2', { hasText: otherSteel }).waitFor(patient);
  await at('revisions').locator('summary').tap();
  await at('revisions').locator('li', { hasText: 'Wrong steel on the card' }).waitFor(patient);
  check('correct: the change stands with its reason and both steels', (await at('revisions').locator('.change').allTextContents()).some((text) => text.includes(otherSteel)));
});

await attempt('move', async () => {
  await at('move-open').tap();
  await page.locator(`[data-spot="${furnace} second"]`).tap(patient);
  await at('move-person').fill(person);
  await sound('move dialog', seen);
  await browser.photo(page, 'tablet-move');
  await at('move-confirm').tap();
  await at('where').locator('li').nth(1).waitFor(patient);
  const { place } = await api(`${loadHash.slice(1).replace('load', 'loads')}/snapshot`);
  check('move: the load stands in the other chamber', place?.chamber === 'second', JSON.stringify(place));
});

await attempt('mark a burn-off', async () => {
  await go(`/furnace/${furnace}`);
  await at('mark-heating_carbon-open').tap(patient);
  const dialog = page.locator('dialog[open]');
  await dialog.locator('[data-testid="mask-reason"]', { hasText: 'burn-off' }).tap();
  await at('mark-heating_carbon-person').fill(person);
  await sound('mark dialog', seen);
  await at('mark-heating_carbon-confirm').tap();
  await at('masks').locator('li', { hasText: 'burn-off' }).first().waitFor(patient);
  const { masks } = await api(`furnaces/${furnace}/masks`);
  check('mark: the stretch is kept with its reason and person', masks.some((mask) => mask.channel === 'heating_carbon' && mask.reason === 'burn-off' && mask.person === person && !mask.withdrawn));
});

await attempt('choose between values', async () => {
  const undecided = async () => (await api(`furnaces/${furnace}/channels/heating_carbon/conflicts?limit=100`)).undecided;
  const before = await undecided();
  check('choose: there is something to decide', before >= 2, before);
  await page.locator('[data-channel="heating_carbon"] [data-testid="conflicts-open"]').tap(patient);
  await at('conflicts').waitFor(patient);
  const row = page.locator('.conflict-list li').filter({ hasNotText: 'chosen by' }).first();
  await row.locator('[data-testid="conflict-value"]').first().tap();
  await at('conflicts-person').fill(person);
  await sound('conflicts', seen);
  await browser.photo(page, 'tablet-conflicts');
  await at('conflicts-save').tap();
  await page.locator('.conflict-list li', { hasText: `chosen by ${person}` }).first().waitFor(patient);
  check('choose: one fewer to decide', await undecided() === before - 1, `${before} -> ${await undecided()}`);
  await at('all-lower').tap();
  await at('conflicts-save').tap();
  await page.waitForFunction(() => document.querySelector('[data-testid="conflicts-save"]')?.textContent === 'Nothing chosen yet', undefined, patient);
  check('choose: the lower for all shown leaves none', await undecided() === 0, await undecided());
});

await attempt('end', async () => {
  await go(loadHash);
  await at('end-open').tap(patient);
  await at('end-person').fill(person);
  await at('end-confirm').tap();
  await page.locator('.load-title .mark', { hasText: 'ended' }).waitFor(patient);
  check('end: nothing but correcting is offered', await at('move-open').count() === 0 && await at('correct').count() === 1);
  await sound('ended load', seen);
});

await browser.close();
await own?.stop();
process.exit(verdict());
