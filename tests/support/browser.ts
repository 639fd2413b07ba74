import AxeBuilder from '@axe-core/playwright';
import { type Browser, type BrowserContext, chromium, type Page } from 'playwright-core';
import { expect } from 'vitest';
import { TEST_PASSWORD } from './test-app.ts';

/** Debian's Chromium, kept from asking anything of the world. */
export async function launchBrowser(): Promise<Browser> {
  return await chromium.launch({
    executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
    args: [
      '--headless',
      '--no-sandbox',
      '--disable-gpu',
      '--disable-quic',
      '--no-first-run',
      '--disable-background-networking',
      '--disable-component-update',
      '--disable-sync',
    ],
  });
}

export interface Person {
  readonly page: Page;
  readonly context: BrowserContext;
  /** Errors the page wrote to its console or threw; a test ends with none. */
  readonly errors: string[];
}

/** Somebody's own browser window of a width. */
export async function openWindow(
  browser: Browser,
  baseUrl: string,
  width = 1440,
  height = 900,
): Promise<Person> {
  const context = await browser.newContext({ baseURL: baseUrl, viewport: { width, height } });
  const page = await context.newPage();
  const errors: string[] = [];
  page.on('console', (message) => {
    if (message.type() === 'error' && page.url().startsWith(baseUrl)) errors.push(message.text());
  });
  page.on('pageerror', (error) => errors.push(String(error)));
  return { page, context, errors };
}

/** The same, signed in. */
export async function signInWindow(
  browser: Browser,
  baseUrl: string,
  email: string,
  width = 1440,
): Promise<Person> {
  const person = await openWindow(browser, baseUrl, width);
  await person.page.goto('/sign-in');
  await person.page.getByLabel('E-mail').fill(email);
  await person.page.getByLabel('Password').fill(TEST_PASSWORD);
  await person.page.getByRole('button', { name: 'Sign in' }).click();
  await person.page.waitForURL((url) => url.pathname === '/');
  return person;
}

/** Nothing wider than the window, and nothing axe objects to (WCAG 2.2 AA rules). */
export async function expectSound(page: Page): Promise<void> {
  const overflow = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  );
  expect([page.url(), overflow]).toEqual([page.url(), 0]);
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'])
    .analyze();
  expect(
    violations.map(
      (each) =>
        `${page.url()} ${each.id}: ${each.nodes[0]?.html.slice(0, 160)} ${each.nodes[0]?.failureSummary ?? ''}`,
    ),
  ).toEqual([]);
}
