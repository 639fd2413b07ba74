import { fileURLToPath } from 'node:url';
import type { Browser } from 'playwright-core';
import { createServer, type ViteDevServer } from 'vite';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { expectSound, launchBrowser, openWindow } from '#tests/support/browser';
import { freePort } from '#tests/support/mariadb';

let vite: ViteDevServer;
let browser: Browser;
let baseUrl: string;

beforeAll(async () => {
  const port = await freePort();
  vite = await createServer({
    configFile: fileURLToPath(new URL('../../../vite.config.ts', import.meta.url)),
    server: { port, host: '127.0.0.1', strictPort: true, hmr: false, watch: null },
    logLevel: 'silent',
  });
  await vite.listen();
  baseUrl = `http://127.0.0.1:${port}`;
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser.close();
  await vite.close();
});

describe('the parts page of development', () => {
  test.each([
    [1440, 'light'],
    [768, 'dark'],
    [390, 'light'],
    [320, 'dark'],
  ] as const)('%i wide, %s · overflows nowhere and satisfies axe', async (width, scheme) => {
    const { page, context, errors } = await openWindow(browser, baseUrl, width);
    await page.emulateMedia({ colorScheme: scheme });
    await page.goto('/parts');
    await page.getByRole('heading', { level: 1, name: 'The parts' }).waitFor({ timeout: 60_000 });
    await expectSound(page);
    expect(errors).toEqual([]);
    await context.close();
  });

  test('a figure and the ledger · answer to the keyboard alone', async () => {
    const { page, context } = await openWindow(browser, baseUrl);
    await page.goto('/parts');
    const figure = page.getByRole('button', { name: '150.00, why' });
    await figure.focus();
    await page.keyboard.press('Enter');
    await page.getByText('The other notation gives the same band.').waitFor();
    expect(page.url()).toContain('why=part');
    await page.keyboard.press('Escape');
    await page.getByText('The other notation gives the same band.').waitFor({ state: 'detached' });
    const table = page.getByRole('table', { name: 'Receipts' });
    await table.getByRole('row', { name: /Receipt 00001/ }).focus();
    await page.keyboard.press('End');
    await table.getByRole('row', { name: /Receipt 10000/ }).waitFor();
    expect(await table.getByRole('row').count()).toBeLessThan(80);
    await page.getByLabel('Find in receipts').fill('00042');
    await page.getByRole('button', { name: 'Save 1 rows as CSV' }).waitFor();
    await context.close();
  });
});
