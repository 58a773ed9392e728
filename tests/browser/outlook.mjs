// Uses the outlook, trials, proposals and alerts of a running daemon as an operator would: reads the standing on the
// Floor, tries a change by touch, asks for a plan, takes it, answers alerts, silences the screen.
//
//   node outlook.mjs [http://127.0.0.1:8473] [folder for screenshots]     or HEARTHFRONT_URL=...
//
// The daemon must run a DEMO plant with an open load that has an outlook: a plan of it is adopted, and alerts are
// acknowledged and shelved. Also runs against the invented plant of web/dev (node dev/mock_server.mjs). What the plant
// does not have (an alert, a target, a load without outlook) is passed over and said so. Exit code 0 when all passed.
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { attempt, check, openBrowser, sizes, sound, verdict } from './harness.mjs';

const [base = process.env.HEARTHFRONT_URL ?? 'http://127.0.0.1:8473', folder = join(tmpdir(), 'hearthfront-screens')] = process.argv.slice(2);
const api = (path) => fetch(new URL(`/api/v1/${path}`, base)).then((answer) => answer.json());
const standings = ['inside', 'shallow', 'deep', 'undecided'];
const person = 'Browser test';

// What documents of an older daemon lack.
const added = { top: ['alerts'], load: ['alerts'], item: ['outlook', 'case_depth_band_mm', 'surface_carbon_band_wt_pct'], snapshot: ['outlook', 'outlook_missing', 'rest', 'plans', 'alerts'], history: ['outlook'], course: ['case_depth_low_mm', 'case_depth_high_mm'] };
const strip = (from, names) => { for (const name of names) delete from?.[name]; };

// Loads whose outlook has come, a miss first: that is what a plan is asked for.
async function loadsAhead() {
  const floor = await api('floor');
  const loads = floor.furnaces.filter((furnace) => !furnace.line).flatMap((furnace) => furnace.loads);
  const order = { shallow: 0, undecided: 1, inside: 2, deep: 3 };
  return { floor, loads, ahead: loads.filter((each) => each.item?.outlook && each.minutes_left > 20).sort((a, b) => order[a.item.outlook.standing] - order[b.item.outlook.standing]) };
}
let { floor, loads, ahead } = await loadsAhead();
for (const end = Date.now() + 60_000; Date.now() < end && ahead.length === 0;) {  // bands take some seconds after a start
  await new Promise((go) => setTimeout(go, 1000));
  ({ floor, loads, ahead } = await loadsAhead());
}
check('it is a demo: this check adopts a plan and answers alerts', floor.demo === true);
check('a load has an outlook', ahead.length > 0);
if (!floor.demo || ahead.length === 0) process.exit(verdict());
const load = ahead[0];
console.log(`screenshots go to ${folder}; load ${load.name}, ${load.item.outlook.standing}`);

const browser = await openBrowser(base, folder);
for (const size of sizes) for (const theme of ['light', 'dark']) await attempt(`${size.name} ${theme}: floor, load, alerts`, () => look(size, theme));
await attempt('a trial by touch', trial);
await attempt('a proposal', proposal);
await attempt('a plan that came too late', tooLate);
await attempt('a plan adopted', adopt);
await attempt('alerts answered', alerts);
await attempt('targets', targets);
await attempt('the sound of the screen', audible);
await attempt('no outlook', none);
await attempt('documents of an older daemon', older);
await browser.close();
process.exit(verdict());

async function at(size, path, how) {
  const seen = await browser.page(size, how);
  seen.page.setDefaultTimeout(90_000);
  await seen.page.goto(new URL(path, base).href);
  return seen;
}

async function look(size, theme) {
  const name = `${size.name} ${theme}`;
  const seen = await at(size, '/#/', { theme });
  const { page } = seen;
  const card = page.locator(`[data-testid="card"][data-load="${load.id}"]`).first();
  await card.locator('[data-testid="standing"]').waitFor({ timeout: 60_000 });
  const standing = await card.locator('[data-testid="standing"]').getAttribute('data-standing');
  check(`${name}: the standing is one of four words, with its shape and a chance`, standings.includes(standing) && /\d %/.test(await card.locator('[data-testid="standing"]').textContent()) && await card.locator('[data-testid="standing"] .shape').count() === 1, standing);
  const letters = await card.locator('[data-testid="standing"] b').evaluate((element) => parseFloat(getComputedStyle(element).fontSize));
  check(`${name}: its word is at least 26 px high`, letters >= 26, letters);
  const words = await card.locator('.strip').getAttribute('aria-label');
  check(`${name}: the strip says band and outlook in words`, /Its band is/.test(words) && /At the end of the plan/.test(words), words);
  check(`${name}: band and diamond are drawn below the metal`, await card.locator('.end-band').count() === 1 && await card.locator('.end-median').count() === 1);
  const counts = (await api('floor')).alerts;
  const said = await page.locator('[data-testid="alert-count"]').textContent();
  check(`${name}: the Floor counts the alerts`, counts.active === 0 ? said.includes('no alert') : /\d+ alerts?,/.test(said), said);
  check(`${name}: the state of the sound is said`, (await page.locator('[data-testid="sound"]').textContent()).trim().length > 5);
  await sound(`${name} floor`, seen);
  await browser.photo(page, `outlook-${size.name}-${theme}-floor`);

  await page.goto(new URL(`/#/load/${load.id}`, base).href);
  await page.locator('[data-testid="outlook-item"]').first().waitFor({ timeout: 60_000 });
  await page.locator('.histories canvas').first().waitFor({ timeout: 60_000 });
  check(`${name} load: the joint chance is a figure`, /\d+ %/.test(await page.locator('[data-testid="joint-chance"]').textContent()));
  const one = await page.locator('[data-testid="outlook-item"]').first().textContent();
  check(`${name} load: true and measured depth are told apart`, one.includes('true depth') && one.includes('as a lab measures'), one);
  check(`${name} load: the curve names its outlook`, (await page.locator('.histories .legend').first().textContent()).includes('outlook with band'));
  const curve = await page.locator('.histories .plot-box').first().getAttribute('aria-label');
  check(`${name} load: the curve says its end in words`, /At the end of the plan/.test(curve), curve);
  await sound(`${name} load`, seen);
  await browser.photo(page, `outlook-${size.name}-${theme}-load`);

  await page.goto(new URL('/#/alerts', base).href);
  await page.locator('[data-testid="alert"], [data-testid="no-alerts"]').first().waitFor({ timeout: 60_000 });
  await sound(`${name} alerts`, seen);
  await browser.photo(page, `outlook-${size.name}-${theme}-alerts`);
  await seen.context.close();
}

async function trial() {
  const revision = (await api(`loads/${load.id}`)).revision;
  const seen = await at(sizes[1], `/#/load/${load.id}`);
  const { page } = seen;
  const panel = page.locator('[data-testid="trial"]');
  const rest = panel.locator('.rest li');
  await rest.first().waitFor({ timeout: 60_000 });
  const last = rest.last();
  for (let i = 0; i < 3; ++i) await last.locator('[aria-label="time: more"]').tap();
  await panel.locator('[data-testid="trial-sentence"]').waitFor({ timeout: 60_000 });
  check('trial: what was changed stands beside the segment', /longer/.test(await last.locator('[data-testid="rest-change"]').textContent()), await last.locator('[data-testid="rest-change"]').textContent());
  check('trial: its outlook stands beside the present one', /\d+ %/.test(await panel.locator('[data-testid="compared-chance"]').textContent()) && await panel.locator('.ends .end-median').count() === 2);
  await sound('trial', seen);
  await panel.screenshot({ path: join(folder, 'outlook-tablet-trial.png') });
  check('trial: the load is not changed by it', (await api(`loads/${load.id}`)).revision === revision);
  await panel.locator('[data-testid="trial-reset"]').tap();
  check('trial: one press brings the plan back', await panel.locator('[data-testid="trial-sentence"]').count() === 0 && await panel.locator('[data-testid="trial-reset"]').count() === 0);
  await seen.context.close();
}

async function asked(page) {
  await page.locator('[data-testid="propose"]').tap();
  await page.locator('[data-testid="proposal"]').waitFor({ timeout: 90_000 });
  return page.locator('[data-testid="proposal"]');
}

async function proposal() {
  const seen = await at(sizes[2], `/#/load/${load.id}`);
  const { page } = seen;
  await page.locator('[data-testid="propose"]').waitFor({ timeout: 60_000 });
  const answer = await asked(page);
  const text = await answer.textContent();
  check('proposal: a sentence, or the reason why there is none', (await answer.getAttribute('data-found')) === 'true' ? /%/.test(text) : /No plan reaches/.test(text), text);
  await sound('proposal', seen);
  await answer.screenshot({ path: join(folder, 'outlook-phone-proposal.png') });
  await seen.context.close();
}

// A change, then the dialog of "Use this plan".
async function openUse(page) {
  const panel = page.locator('[data-testid="trial"]');
  await panel.locator('.rest li').first().waitFor({ timeout: 60_000 });
  await panel.locator('.rest li').last().locator('[aria-label="time: more"]').tap();
  await panel.locator('[data-testid="trial-sentence"]').waitFor({ timeout: 60_000 });
  await page.locator('[data-testid="trial-use-open"]').tap();
  await page.locator('[data-testid="trial-use-reason"]').fill('Browser test: a longer end');
  await page.locator('[data-testid="trial-use-person"]').fill(person);
}

async function tooLate() {
  const seen = await at(sizes[1], `/#/load/${load.id}`, { forgiving: true });
  const { page, context } = seen;
  await context.route(`**/api/v1/loads/${load.id}/plan`, (route) => route.fulfill({ status: 409, contentType: 'application/problem+json', body: JSON.stringify({ type: '/problems/load-changed', title: 'Load changed', status: 409, detail: 'The load is at another revision.' }) }));
  await openUse(page);
  check('plan: the controller is to be set by hand, in plain words', (await page.locator('dialog[open] .by-hand').textContent()).includes('by hand'));
  await page.locator('[data-testid="trial-use-confirm"]').tap();
  await page.locator('dialog[open] [role="alert"]').waitFor({ timeout: 20_000 });
  check('plan: a load changed meanwhile keeps the dialog open and says what to do', /changed this load meanwhile/.test(await page.locator('dialog[open] [role="alert"]').textContent()));
  await seen.context.close();
}

async function adopt() {
  const before = (await api(`loads/${load.id}/snapshot`)).plans?.length ?? 0;
  const seen = await at(sizes[1], `/#/load/${load.id}`);
  const { page } = seen;
  await openUse(page);
  await browser.photo(page, 'outlook-tablet-use');
  await page.locator('[data-testid="trial-use-confirm"]').tap();
  await page.locator('[data-testid="plans"]', { hasText: 'a longer end' }).waitFor({ timeout: 60_000 });
  check('plan: it is in the list with its name and reason', (await page.locator('[data-testid="plans"] li').first().textContent()).includes(person));
  check('plan: the daemon has it', ((await api(`loads/${load.id}/snapshot`)).plans?.length ?? 0) === before + 1);
  await sound('adopted plan', seen);
  await seen.context.close();
}

async function alerts() {
  const open = (await api('alerts?state=active')).alerts.filter((each) => !each.acknowledged && !each.shelved);
  if (open.length === 0) { console.log('note  no unanswered alert: acknowledging and shelving are passed over'); return; }
  const seen = await at(sizes[2], '/#/alerts');
  const { page } = seen;
  const row = (id) => page.locator(`[data-testid="alert"][data-alert="${id}"]`);
  const [first, second] = open;
  await row(first.id).waitFor({ timeout: 60_000 });
  check('alerts: severity is a shape and a word', await row(first.id).locator('.severity .shape').count() === 1 && (await row(first.id).locator('.severity').textContent()).includes(first.severity));
  check('alerts: what became of the messages is said', await row(first.id).locator('[data-testid="delivery"]').count() > 0);
  await row(first.id).locator(`[data-testid="acknowledge-${first.id}-open"]`).tap();
  await page.locator(`[data-testid="acknowledge-${first.id}-person"]`).fill(person);
  await page.locator(`[data-testid="acknowledge-${first.id}-confirm"]`).tap();
  await row(first.id).locator('[data-testid="acknowledged"]', { hasText: person }).waitFor({ timeout: 20_000 });
  check('alerts: acknowledged, with the name', true);
  if (second) {
    await row(second.id).locator(`[data-testid="shelve-${second.id}-open"]`).tap();
    check('alerts: the name is remembered', await page.locator(`[data-testid="shelve-${second.id}-person"]`).inputValue() === person);
    check('alerts: nothing is shelved without a reason', await page.locator(`[data-testid="shelve-${second.id}-confirm"]`).isDisabled());
    await page.locator(`[data-testid="shelve-${second.id}-reason"]`).fill('Browser test');
    await page.locator(`[data-testid="shelve-${second.id}-confirm"]`).tap();
    await row(second.id).locator('[data-testid="shelved"]').waitFor({ timeout: 20_000 });
    await row(second.id).locator(`[data-testid="unshelve-${second.id}-open"]`).tap();
    await page.locator(`[data-testid="unshelve-${second.id}-confirm"]`).tap();
    await row(second.id).locator('[data-testid="shelved"]').waitFor({ state: 'detached', timeout: 20_000 });
    check('alerts: shelved and back', true);
  }
  await row(first.id).locator('[data-testid="alert-more"] summary').tap();
  await row(first.id).locator('.alert-record li', { hasText: 'acknowledged' }).first().waitFor({ timeout: 20_000 });
  check('alerts: its events are listed', await row(first.id).locator('.alert-record ol li').count() >= 2);
  await sound('alerts answered', seen);
  await page.locator('[data-testid="alerts-past"]').tap();
  await page.locator('[data-testid="alert"], [data-testid="no-alerts"]').first().waitFor({ timeout: 20_000 });
  check('alerts: the past shows none that is active', await row(first.id).count() === 0);
  await seen.context.close();
}

async function targets() {
  const named = (await api('targets')).targets;
  const seen = await at(sizes[1], '/#/alerts');
  const { page } = seen;
  await page.locator('[data-testid="targets"]').waitFor({ timeout: 60_000 });
  if (named.length === 0) { check('targets: none is said', (await page.locator('[data-testid="targets"]').textContent()).includes('Nowhere')); await seen.context.close(); return; }
  const row = page.locator(`[data-testid="target"][data-target="${named[0].name}"]`);
  await row.locator('button', { hasText: 'Send a test' }).tap();
  await page.locator(`[data-testid="test-${named[0].name}-person"]`).fill(person);
  await page.locator(`[data-testid="test-${named[0].name}-confirm"]`).tap();
  await row.locator('[data-testid="target-said"]').waitFor({ timeout: 20_000 });
  check('targets: a test says whether it arrived', /arrive/.test(await row.locator('[data-testid="target-said"]').textContent()));
  await seen.context.close();
}

// The Floor is given one urgent alert of its own making, so that this does not hang on what the plant does.
async function audible() {
  const seen = await browser.page(sizes[0]);
  const { page, context } = seen;
  let id = 900_001;
  const urgent = () => ({ id, kind: 'test', severity: 'urgent', sentence: 'Made by the browser test.', advice: null, since: floor.now, acknowledged: false, shelved: false });
  await context.route('**/api/v1/events', (route) => route.abort());
  await context.route('**/api/v1/floor', async (route) => {
    const got = await route.fetch(), body = await got.json();
    body.alerts = { active: 1, unacknowledged: 1, worst: 'urgent', newest_id: id, plant: [urgent()] };
    for (const furnace of body.furnaces) { furnace.alerts = []; for (const each of furnace.loads) each.alerts = []; }
    await route.fulfill({ response: got, json: body });
  });
  await page.goto(new URL('/#/', base).href);
  const button = page.locator('[data-testid="sound"]');
  const is = (state) => page.locator(`[data-testid="sound"][data-state="${state}"]`).waitFor({ timeout: 15_000 });
  await is('blocked');
  check('sound: until a touch the screen says that it is off', (await button.textContent()).includes('until you touch here'));
  await button.click();
  await is('sounding');
  check('sound: one touch, and an urgent alert sounds', true);
  await page.locator('[data-testid="silence"]').click();
  await is('silenced');
  check('sound: silenced, with the time it ends', /silenced to \d\d:\d\d/.test(await button.textContent()), await button.textContent());
  id += 1;
  await is('sounding');
  check('sound: a new alert sounds in spite of the silence', true);
  await button.click();
  await page.locator('[data-testid="sound-off"]').click();
  await page.locator('[data-testid="sound-close"]').click();
  await is('off');
  await page.reload();
  await is('off');
  check('sound: switched off stays off on this screen', true);
  await sound('sound', { ...seen, errors: () => seen.errors().filter((each) => !each.startsWith('Failed to load resource')) });
  await context.close();
}

async function none() {
  const without = [];
  for (const each of loads) if (each.item && !each.item.outlook) without.push(each);
  if (without.length === 0) { console.log('note  every load has an outlook: the words in its place are passed over'); return; }
  const seen = await at(sizes[1], `/#/load/${without[0].id}`);
  await seen.page.locator('[data-testid="outlook-missing"]').waitFor({ timeout: 60_000 });
  const words = await seen.page.locator('[data-testid="outlook-missing"]').textContent();
  check('no outlook: the words stand in its place, with the reason', words.includes('band not computed') && words.length > 30, words);
  check('no outlook: there is nothing to try', await seen.page.locator('[data-testid="trial"]').count() === 0);
  await sound('no outlook', seen);
  await seen.context.close();
}

async function older() {
  const seen = await browser.page(sizes[1]);
  const { page, context } = seen;
  await context.route('**/api/v1/events', (route) => route.abort());
  const without = (pattern, work) => context.route(pattern, async (route) => { const got = await route.fetch(); if (got.status() !== 200) { await route.fulfill({ response: got }); return; } const body = await got.json(); work(body); await route.fulfill({ response: got, json: body }); });
  await without('**/api/v1/floor', (body) => { strip(body, added.top); for (const furnace of body.furnaces) { strip(furnace, added.load); for (const each of furnace.loads) { strip(each, added.load); strip(each.item, added.item); } } });
  await without('**/snapshot', (body) => { strip(body, added.snapshot); for (const each of body.items) strip(each, added.item); });
  await without('**/history', (body) => { strip(body, added.history); for (const each of body.items) strip(each, added.course); });
  await page.goto(new URL('/#/', base).href);
  await page.locator('[data-testid="card"]').first().waitFor({ timeout: 60_000 });
  check('older documents: the Floor works and says nothing of an outlook', await page.locator('[data-testid="standing"]').count() === 0 && await page.locator('[data-testid="alert-count"]').count() === 0);
  await page.goto(new URL(`/#/load/${load.id}`, base).href);
  await page.locator('.histories canvas').first().waitFor({ timeout: 60_000 });
  check('older documents: a load works without outlook and trial', await page.locator('[data-testid="outlook"], [data-testid="trial"]').count() === 0);
  const errors = seen.errors().filter((each) => !each.startsWith('Failed to load resource'));
  check('older documents: no error in the console', errors.length === 0, errors.join('; '));
  await context.close();
}
