import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { htmlReport } from '../../src/report/html.js';
import { accessibilityFaults, chromiumPath, openBrowser } from './browser.js';
import { hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { hasTool } from './outside_tool.js';
import { samplePlots } from './sample_plots.js';
import { metRun, sampleRun } from './sample_run.js';

const report = htmlReport(sampleRun(), { plots: samplePlots });
const hasBrowser = hasTool(chromiumPath, 'chromium');

/** The page as Chromium (Debian's) shows it, checked for accessibility by axe-core. */
describe.runIf(hasBrowser)('the page in a browser', () => {
  const folder = mkdtempSync(join(tmpdir(), 'pawl-report-'));
  let browser: Browser;
  beforeAll(async () => {
    browser = await openBrowser();
  });
  afterAll(async () => {
    await browser?.close();
    rmSync(folder, { recursive: true });
  });

  const shown = async <T>(
    text: string,
    look: { width: number; colorScheme?: 'light' | 'dark'; javaScriptEnabled?: boolean },
    lookAt: (page: Page) => Promise<T>,
  ): Promise<T> => {
    const { width, ...others } = look;
    const page = await browser.newPage({ viewport: { width, height: 900 }, ...others });
    try {
      await page.setContent(text);
      return await lookAt(page);
    } finally {
      await page.close();
    }
  };

  it('has no fault of accessibility and fits at both widths, light and dark', async () => {
    await shown(report, { width: 1280 }, async (page) => {
      for (const width of [1280, 390]) {
        for (const colorScheme of ['light', 'dark'] as const) {
          await page.setViewportSize({ width, height: 900 });
          await page.emulateMedia({ colorScheme });
          expect(await accessibilityFaults(page)).toEqual([]);
          expect(await page.evaluate('document.documentElement.scrollWidth')).toBeLessThanOrEqual(width);
          const path = join(folder, `${colorScheme}-${width}.png`);
          expect((await page.screenshot({ path, fullPage: true })).length).toBeGreaterThan(20_000);
        }
      }
    });
  });

  it('shows the verdict first and everything without scripts', async () => {
    await shown(report, { width: 1280, javaScriptEnabled: false }, async (page) => {
      const heading = page.getByRole('heading', { level: 1 });
      expect(await heading.textContent()).toBe('merge blocked: 2 broken, 1 unjudged, 3 met');
      expect((await heading.boundingBox())!.y).toBeLessThan(100);
      expect(await page.getByRole('article').count()).toBe(6);
      expect(await page.getByRole('img').count()).toBe(6 + 5);
      expect(await page.getByRole('img', { name: 'AZ-1 against its limit' }).isVisible()).toBe(true);
    });
  });

  it('is reached by keyboard: skip link, names, tables, details', async () => {
    await shown(report, { width: 1280 }, async (page) => {
      const reached: string[] = [];
      while (reached.length < 60 && (reached.length < 2 || reached.at(-1) !== reached[0])) {
        await page.keyboard.press('Tab');
        reached.push(
          await page.evaluate(
            'document.activeElement.tagName + " " + document.activeElement.textContent.slice(0, 12)',
          ),
        );
      }
      expect(reached[0]).toBe('A To the verdi');
      expect(reached).toContain('A AZ-7');
      expect(reached.filter((one) => one.startsWith('SUMMARY'))).toHaveLength(6 + 1);
      expect(reached.some((one) => one.startsWith('DIV'))).toBe(true);
    });
  });

  it('goes from a name in the table to its requirement', async () => {
    await shown(report, { width: 1280 }, async (page) => {
      await page.getByRole('link', { name: 'AZ-7' }).first().press('Enter');
      await expect.poll(() => page.evaluate('scrollY')).toBeGreaterThan(900);
      expect(await page.evaluate('location.hash')).toBe('#s1-r6');
    });
  });

  it('tells values on hovering', async () => {
    await shown(report, { width: 1280 }, async (page) => {
      const titles = await page.locator('.hover title').allTextContents();
      expect(
        titles.some((title) => /^at 1.\d+ s: nominal [\d.]+ mrad, latched [\d.]+ mrad, worst/.test(title)),
      ).toBe(true);
      expect(titles.some((title) => /^at [\d.]+ rad\/s \([\d.]+ Hz\): nominal .* dB/.test(title))).toBe(true);
    });
  });

  it('prints dark on white with nothing cut off', async () => {
    await shown(report, { width: 700, colorScheme: 'dark' }, async (page) => {
      await page.emulateMedia({ media: 'print' });
      expect(await page.evaluate('getComputedStyle(document.body).backgroundColor')).toBe(
        'rgb(255, 255, 255)',
      );
      expect(await page.evaluate('getComputedStyle(document.querySelector(".scroll")).overflowX')).toBe(
        'visible',
      );
      expect(await page.evaluate('document.documentElement.scrollWidth')).toBeLessThanOrEqual(700);
      expect((await page.pdf({ format: 'A4' })).length).toBeGreaterThan(20_000);
    });
  });

  it.each([
    ['met', htmlReport(metRun())],
    [
      'nothing but faults',
      htmlReport({ version: '1', specs: [] }, { faults: [{ specFile: 'a', messages: ['x'] }] }),
    ],
  ])('has no fault of accessibility: %s', async (_, text) => {
    await shown(text, { width: 390 }, async (page) => expect(await accessibilityFaults(page)).toEqual([]));
  });

  it('is not harmed by hostile names: they are shown, nothing runs, nothing is fetched, nothing is too wide', async () => {
    const specs = Object.values(hostileNames).flatMap((name) => hostileRun(name).specs);
    await shown(htmlReport({ version: '1', specs }), { width: 390 }, async (page) => {
      const harm: string[] = [];
      page.on('dialog', (dialog) => {
        harm.push(dialog.message());
        void dialog.dismiss();
      });
      page.on('request', (request) => harm.push(request.url()));
      expect(await page.locator('article').count()).toBe(4 * specs.length);
      expect(await page.locator('script, iframe, object, embed, img, base, link').count()).toBe(0);
      expect(await page.evaluate('document.documentElement.scrollWidth')).toBeLessThanOrEqual(390);
      expect(harm).toEqual([]);
    });
  });
});
