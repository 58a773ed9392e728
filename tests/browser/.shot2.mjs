import { chromium } from 'playwright-core';
const [url, path, name, w, h, scheme] = process.argv.slice(2);
const browser = await chromium.launch({ executablePath: '/usr/bin/chromium', args: ['--no-sandbox'] });
const page = await browser.newPage({ viewport: { width: +w, height: +h }, colorScheme: scheme ?? 'light' });
await page.goto(url + '/' + path); await page.waitForTimeout(2500);
for (const text of (process.argv[8] ?? '').split('|').filter(Boolean)) { await page.getByRole('button', { name: text }).first().click(); await page.waitForTimeout(2500); }
await page.screenshot({ path: `/tmp/hf/${name}.png`, fullPage: true });
await browser.close();
