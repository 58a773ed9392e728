// Uses the dashboard of a running daemon as an operator would: looks at the Floor and a load on a wall
// screen, a tablet and a phone, loses and finds the daemon again, starts a load by touch and ends it.
//
//   node floor_and_load.mjs [http://127.0.0.1:8473] [folder for screenshots]     or HEARTHFRONT_URL=... npm test
//
// The daemon must have an open load whose readings arrive; its demo clock must run fast enough (60 times or more)
// that a depth moves by 0.01 mm within 20 s. Where no furnace is free, another load of a DEMO plant is ended to
// free one. Exit code 0 when every check passed; the last line counts them.
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { attempt, changes, check, openBrowser, sizes, sound, verdict } from './harness.mjs';
import { endByTouch, startByTouch } from './start_by_touch.mjs';

const [base = process.env.HEARTHFRONT_URL ?? 'http://127.0.0.1:8473', folder = join(tmpdir(), 'hearthfront-screens')] = process.argv.slice(2);
const api = (path) => fetch(new URL(`/api/v1/${path}`, base)).then((answer) => answer.json());
const movesWithinMs = 20_000;

let floor = await api('floor');
// A demo that has just begun puts its dozens of loads in over some seconds.
for (const end = Date.now() + 60_000; Date.now() < end && !floor.furnaces.every((furnace) => furnace.loads.length > 0);) {
  await new Promise((go) => setTimeout(go, 1000));
  floor = await api('floor');
}
// A load whose case is growing (on a young one the depth may still be none) and which will not end meanwhile.
const shown = floor.furnaces.filter((furnace) => !furnace.line).flatMap((furnace) => furnace.loads);  // a line shows one load only
const growing = shown.filter((each) => each.condition === 'live' && each.item?.case_depth_mm !== null);
const load = growing.sort((a, b) => b.minutes_left - a.minutes_left)[0] ?? shown[0];
check('the daemon has an open load to look at', load !== undefined);
console.log(`screenshots go to ${folder}`);

const browser = await openBrowser(base, folder);
for (const size of sizes) {
  await attempt(`${size.name}: floor and load`, () => look(size));
}
const line = floor.furnaces.find((furnace) => furnace.line && furnace.loads.length > 0);
if (line) for (const size of sizes) await attempt(`${size.name}: a line`, () => lineRow(size));
await attempt('units and theme', preferences);
await attempt('two tabs', twoTabs);
await attempt('lost contact', lostContact);
await attempt('start by touch', async () => {
  const now = await api('floor');
  const other = now.furnaces.find((furnace) => !furnace.line && furnace.loads.length > 0 && furnace.loads.every((each) => each.id !== load.id));
  const free = now.furnaces.find((furnace) => furnace.loads.length === 0) ?? (now.demo ? other : undefined);
  check('a furnace is free, or a demo has one to free', free !== undefined);
  if (!free) return;
  for (const each of free.loads) await endByTouch({ base, browser, load: each });
  await startByTouch({ base, browser, furnace: free });
});
await browser.close();
process.exit(verdict());

async function look(size) {
  const seen = await browser.page(size);
  const { page } = seen;
  await page.goto(new URL('/#/', base).href);
  await page.locator('[data-testid="card"]').first().waitFor({ timeout: 60_000 });
  const now = (await api('floor')).furnaces.reduce((sum, furnace) => sum + (furnace.line ? Math.min(1, furnace.loads.length) : furnace.loads.length), 0);
  check(`${size.name}: a card or row for each open load that is not on a line, and one for each line`, await page.locator('[data-testid="card"]').count() === now, now);
  check(`${size.name}: a band, or the words in its place`, /^(now \d.* – \d|band not computed)/.test(await page.locator('.card .band').first().textContent()), await page.locator('.card .band').first().textContent());
  const figure = await page.locator('.figure').first().evaluate((element) => parseFloat(getComputedStyle(element).fontSize));
  check(`${size.name}: the depth is at least 56 px high`, figure >= 56, figure);
  const marked = floor.demo || floor.clock_speed !== 1;
  check(`${size.name}: a demo says so`, await page.locator('[data-testid="demo"]').count() === (marked ? 1 : 0));
  check(`${size.name}: the caution stands below`, (await page.locator('footer').textContent()).includes('NFPA 86'));
  await moving(`${size.name} floor`, page);
  await sound(`${size.name} floor`, seen);
  await browser.photo(page, `${size.name}-floor`);

  const link = page.locator(`[data-load="${load.id}"] a.whole`).first();
  if (size.touch) await link.tap(); else await link.click();
  await page.waitForURL(`**/#/load/${load.id}`);
  await page.locator('.plot canvas').nth(3).waitFor({ timeout: 60_000 });
  const words = await page.locator('section.present .strip').getAttribute('aria-label');
  check(`${size.name} load: the strip says its figures in words`, /Case depth now|No case yet/.test(words) && /The drawing asks/.test(words), words);
  const drawn = await page.locator('.plot canvas').evaluateAll((all) => all.filter((canvas) => canvas.getContext('2d').getImageData(0, 0, canvas.width, canvas.height).data.some((part) => part > 0)).length);
  const plots = await page.locator('.plot canvas').count();
  check(`${size.name} load: profile and history are drawn`, plots >= 4 && drawn === plots, `${drawn} of ${plots}`);
  await moving(`${size.name} load`, page);
  await sound(`${size.name} load`, seen);
  await browser.photo(page, `${size.name}-load`);
  await page.keyboard.press('Tab');
  const outline = await page.evaluate(() => getComputedStyle(document.activeElement).outlineStyle);
  check(`${size.name}: keyboard focus is visible`, outline === 'solid', outline);
  await seen.context.close();

  const dark = await browser.page(size, { theme: 'dark' });
  await dark.page.goto(new URL(`/#/load/${load.id}`, base).href);
  await dark.page.locator('.plot canvas').first().waitFor({ timeout: 60_000 });
  await browser.photo(dark.page, `${size.name}-load-dark`);
  await dark.page.goto(new URL('/#/', base).href);
  await dark.page.locator('[data-testid="card"]').first().waitFor();
  await browser.photo(dark.page, `${size.name}-floor-dark`);
  await sound(`${size.name} dark`, dark);
  await dark.context.close();
}

// A line's trays are one row that opens their list; the worst of them stands below in full.
async function lineRow(size) {
  const seen = await browser.page(size);
  const { page } = seen;
  await page.goto(new URL('/#/', base).href);
  const card = page.locator(`[data-furnace-card="${line.id}"]`);
  await card.locator('summary').click({ timeout: 60_000 });
  const places = line.chambers.reduce((sum, chamber) => sum + chamber.places, 0);
  check(`${size.name} line: a shape for each place`, await card.locator('.tray').count() === places, await card.locator('.tray').count());
  check(`${size.name} line: the row says its figures in words`, / trays on \d+ places/.test(await card.locator('.line-row').getAttribute('aria-label')));
  check(`${size.name} line: the list names every load`, await card.locator('.tray-list a').count() === (await api('floor')).furnaces.find((each) => each.id === line.id).loads.length);
  await sound(`${size.name} line`, seen);
  await browser.photo(page, `${size.name}-line`);
  await seen.context.close();
}

async function moving(label, page) {
  const [depth, age] = await Promise.all([changes(page, 'depth', movesWithinMs), changes(page, 'data-age', movesWithinMs)]);
  check(`${label}: a depth moves`, depth.moved, depth.first);
  check(`${label}: the data age moves`, age.moved, age.first);
}

async function preferences() {
  const seen = await browser.page(sizes[1]);
  const { page } = seen;
  await page.goto(new URL(`/#/load/${load.id}`, base).href);
  await page.locator('section.present').waitFor();
  await page.locator('[data-testid="unit-length"]').tap();
  await page.locator('[data-testid="unit-temperature"]').tap();
  await page.reload();
  await page.locator('.rows').first().waitFor();
  check('units: inches and Fahrenheit are kept over a reload', (await page.locator('.big small').textContent()) === 'in' && (await page.locator('.rows').first().textContent()).includes('°F'));
  await page.locator('[data-testid="theme"]').tap();
  await page.locator('[data-testid="theme"]').tap();
  check('theme: the second press is dark', await page.evaluate(() => document.documentElement.dataset.theme) === 'dark');
  await sound('units and theme', seen);
  await seen.context.close();
}

// Both tabs stay current on one stream, and the second takes it over when the first is closed.
async function twoTabs() {
  const { page, context } = await browser.page(sizes[1]);
  let streams = 0;
  context.on('request', (request) => { if (request.url().endsWith('/api/v1/events')) ++streams; });
  await page.goto(new URL('/#/', base).href);
  await page.locator('[data-testid="card"]').first().waitFor();
  const second = await context.newPage();
  await second.goto(new URL('/#/', base).href);
  await second.locator('[data-testid="card"]').first().waitFor();
  check('two tabs: the second is current', (await changes(second, 'data-age', 10_000)).moved);
  check('two tabs: they share one stream', streams === 1, streams);
  await page.close();
  check('two tabs: the one that stays is current', (await changes(second, 'data-age', 10_000)).moved);
  check('two tabs: it has taken the stream over', streams === 2, streams);
  await context.close();
}

// First no stream (polling must carry on), then no answer at all, then everything back.
async function lostContact() {
  const seen = await browser.page(sizes[0]);
  const { page, context } = seen;
  await context.route('**/api/v1/events', (route) => route.abort());
  await page.goto(new URL('/#/', base).href);
  await page.locator('[data-testid="card"]').first().waitFor();
  check('without a stream the data age still moves', (await changes(page, 'data-age', 10_000)).moved);
  await context.route('**/api/**', (route) => route.abort());
  const since = Date.now();
  await page.locator('[data-testid="away"]').waitFor({ timeout: 60_000 });
  const after = (Date.now() - since) / 1000;
  check('the daemon is called away after about ten seconds', after > 7 && after < 20, after);
  check('every figure is marked old, with its time', await page.locator('[data-testid="then"]').count() === await page.locator('[data-testid="card"]').count());
  await browser.photo(page, 'wall-away');
  await context.unrouteAll();
  await page.locator('[data-testid="away"]').waitFor({ state: 'detached', timeout: 20_000 });
  check('contact found again', await page.locator('[data-testid="then"]').count() === 0);
  await context.close();
}
