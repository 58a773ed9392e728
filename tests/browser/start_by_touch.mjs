// Starts a load through the form by touch: sees the daemon's complaint at its field, finds everything typed
// still there, puts it right, writes a note, ends the load, and takes its recipe over for the next one.
import { check, sizes, sound } from './harness.mjs';

async function end(page, whileOpen = async () => undefined) {
  await page.locator('[data-testid="end-open"]').tap();
  await page.locator('[data-testid="end-person"]').fill('Touch test');
  await whileOpen();
  await page.locator('[data-testid="end-confirm"]').tap();
  await page.locator('.load-title .mark', { hasText: 'ended' }).waitFor({ timeout: 60_000 });
}

export async function endByTouch({ base, browser, load }) {
  const seen = await browser.page(sizes[1]);
  await seen.page.goto(new URL(`/#/load/${load.id}`, base).href);
  await end(seen.page);
  await seen.context.close();
}

export async function startByTouch({ base, browser, furnace }) {
  const seen = await browser.page(sizes[1], { forgiving: true });
  const { page } = seen;
  const field = (path) => page.locator(`[data-path="${path}"]`);
  const name = `T${String(Date.now()).slice(-6)}`;

  await page.goto(new URL('/#/', base).href);
  await page.locator(`[data-furnace="${furnace.id}"] a.button`).tap();
  await page.locator('[data-testid="start-form"]').waitFor();
  await field('furnace').locator('option').nth(1).waitFor({ state: 'attached' });
  check('start: the furnace is chosen already', await field('furnace').inputValue() === furnace.id);
  await field('name').fill(name);
  await field('person').fill('Touch test');
  const chamber = field('chamber');
  if (await chamber.count() > 0) await chamber.selectOption({ index: 1 });
  for (const [i, [temperature, carbon]] of [['930', '1,10'], ['930', '0,80']].entries()) {
    await page.locator(`[aria-label="Segment ${i + 1}"] [aria-label="time: more"]`).tap();
    await field(`recipe.segments[${i}].temperature_degc`).fill(temperature);
    await field(`recipe.segments[${i}].carbon_potential_wt_pct`).fill(carbon);
  }
  await field('items[0].part').fill('test piece');
  await field('items[0].steel').selectOption({ index: 1 });
  await field('items[0].section.thickness_mm').fill('20');
  await field('items[0].case_depth_window_mm').fill('1,2');
  await field('items[0].case_depth_window_mm[1]').fill('0,9');
  check('start: a press on + began at an hour', await field('recipe.segments[0].duration_min').inputValue() === '60');
  await sound('start form', seen);
  await browser.photo(page, 'tablet-start');

  await page.locator('[data-testid="start-submit"]').tap();
  await page.locator('[data-testid="refusal"]').waitFor({ timeout: 60_000 });
  check('start: the complaint stands at its item', await page.locator('[data-said^="items[0]"]').count() > 0, await page.locator('[data-testid="refusal"]').textContent());
  check('start: nothing typed is lost', await field('name').inputValue() === name && await field('items[0].case_depth_window_mm').inputValue() === '1.2');
  await sound('start form refused', seen);
  await browser.photo(page, 'tablet-start-refused');
  const go = page.locator('[data-testid="go-to-field"]');
  if (await go.count() > 0) {
    await go.tap();
    check('start: the button leads to the field', await page.evaluate(() => document.activeElement?.getAttribute('data-path')?.startsWith('items[0]') ?? false));
  }
  await field('items[0].case_depth_window_mm').fill('0.9');
  await field('items[0].case_depth_window_mm[1]').fill('1.2');
  await page.locator('[data-testid="start-submit"]').tap();
  await page.waitForURL(/#\/load\/\d+$/, { timeout: 60_000 });
  await page.locator('section.present').waitFor({ timeout: 60_000 });
  check('start: the load is open under its number', (await page.locator('h1').first().textContent()).includes(name));

  await page.locator('[data-testid="note-text"]').fill('Basket turned at the door.');
  await page.locator('[data-testid="note-person"]').fill('Touch test');
  await page.locator('[data-testid="note-add"]').tap();
  await page.locator('.notes li', { hasText: 'Basket turned at the door.' }).waitFor({ timeout: 60_000 });
  check('note: it stands on the page with its name', (await page.locator('.notes li').last().textContent()).includes('Touch test'));

  await end(page, async () => {
    await sound('end dialog', seen);
    await browser.photo(page, 'tablet-end');
  });
  check('end: the load shows as ended', await page.locator('[data-testid="end-open"]').count() === 0);
  await browser.photo(page, 'tablet-ended');

  await page.goto(new URL('/#/loads', base).href);
  await page.locator('.loads a', { hasText: name }).waitFor({ timeout: 60_000 });
  check('loads: it is in the list as ended', (await page.locator('.loads a', { hasText: name }).textContent()).includes('ended'));
  await sound('loads', seen);
  await browser.photo(page, 'tablet-loads');

  await page.goto(new URL(`/#/start?furnace=${furnace.id}`, base).href);
  await page.locator('[data-testid="again"]', { hasText: name }).tap();
  await page.locator('[data-testid="again-taken"]', { hasText: name }).waitFor({ timeout: 60_000 });
  check('start again: recipe and item are taken over', await field('recipe.segments[1].duration_min').inputValue() === '60' && await field('items[0].part').inputValue() === 'test piece');
  check('start again: the number is asked anew', await field('name').inputValue() === '');
  await seen.context.close();
}
