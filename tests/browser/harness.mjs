// Shared by the browser checks: one headless browser, pages that remember every error and every request,
// and a count of what passed. Needs a daemon that already runs; starts and stops none.
import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import { chromium } from 'playwright-core';

const switches = ['--no-sandbox', '--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync'];

export const sizes = [
  { name: 'wall', width: 1920, height: 1080, touch: false },
  { name: 'tablet', width: 1024, height: 768, touch: true },
  { name: 'phone', width: 390, height: 844, touch: true },
];

let passed = 0, failed = 0;
export function check(what, holds, seen = '') {
  if (holds) ++passed; else ++failed;
  console.log(`${holds ? 'pass' : 'FAIL'}  ${what}${holds || seen === '' ? '' : `  (seen: ${seen})`}`);
}
export async function attempt(what, work) {
  try { await work(); } catch (error) { check(what, false, String(error.message ?? error).split('\n')[0]); }
}
export function verdict() {
  console.log(`${passed} passed, ${failed} failed`);
  return failed === 0 && passed > 0 ? 0 : 1;
}

export async function openBrowser(base, folder) {
  mkdirSync(folder, { recursive: true });
  const browser = await chromium.launch({ executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium', args: switches });
  const host = new URL(base).host;
  return {
    close: () => browser.close(),
    photo: (page, name) => page.screenshot({ path: join(folder, `${name}.png`), fullPage: true, timeout: 90_000 }),
    async page(size, { theme = 'light', forgiving = false } = {}) {
      const context = await browser.newContext({ viewport: { width: size.width, height: size.height }, hasTouch: size.touch, colorScheme: theme });
      const page = await context.newPage();
      const trouble = [], abroad = [];
      page.on('console', (message) => { if (message.type() === 'error') trouble.push(message.text()); });
      page.on('pageerror', (error) => trouble.push(error.message));
      page.on('request', (request) => { if (new URL(request.url()).host !== host) abroad.push(request.url()); });
      // Chromium itself reports a refused answer (4xx) as a console error; the form check provokes one on purpose.
      const errors = () => (forgiving ? trouble.filter((each) => !each.startsWith('Failed to load resource')) : trouble);
      return { page, context, errors, abroad };
    },
  };
}

export const overflow = (page) => page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);

// Everything that can be pressed and is under 48 px one way. A link that covers its card counts by the card.
export const smallTargets = (page) => page.evaluate(() => {
  const small = [];
  for (const element of document.querySelectorAll('a[href], button, input, select, textarea, summary')) {
    const covers = getComputedStyle(element, '::after').position === 'absolute';
    const box = (covers ? element.closest('article') ?? element : element).getBoundingClientRect();
    if (box.width === 0 && box.height === 0) continue;
    if (box.width < 47.5 || box.height < 47.5) small.push(`${element.tagName} "${(element.textContent || element.getAttribute('data-path') || '').trim().slice(0, 24)}" ${box.width.toFixed(0)}x${box.height.toFixed(0)}`);
  }
  return small;
});

export const texts = (page, id) => page.locator(`[data-testid="${id}"]`).allTextContents().then((all) => all.join(' | '));

export async function changes(page, id, withinMs) {
  const first = await texts(page, id);
  const until = Date.now() + withinMs;
  while (Date.now() < until) {
    await page.waitForTimeout(250);
    if (await texts(page, id) !== first) return { moved: true, first };
  }
  return { moved: false, first };
}

export async function sound(label, { page, errors, abroad }) {
  check(`${label}: no sideways scroll`, await overflow(page) <= 0, await overflow(page));
  const small = await smallTargets(page);
  check(`${label}: every target at least 48 px`, small.length === 0, small.join('; '));
  check(`${label}: no error in the console`, errors().length === 0, errors().join('; '));
  check(`${label}: no request leaves the host`, abroad.length === 0, abroad.join('; '));
}
