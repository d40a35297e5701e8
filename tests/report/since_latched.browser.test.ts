import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { htmlReport } from '../../src/report/html.js';
import { accessibilityFaults, chromiumPath, openBrowser } from './browser.js';
import { hasTool } from './outside_tool.js';
import { requirement } from './sample_run.js';
import { finished, margin } from './sample_since_latched.js';

const waiver = { reason: 'new motor in March', until: '2027-03-01', letsThrough: true };
const broken = { kind: 'broken', headroom: -0.1, why: 'a plant breaks it' } as const;
const page = htmlReport(finished({ requirements: [margin(), requirement({ verdict: broken, waiver })] }));

/** What the page says of a change, as Chromium (Debian's) shows it, checked for accessibility by axe-core. */
describe.runIf(hasTool(chromiumPath, 'chromium'))('what lost the headroom, in a browser', () => {
  let browser: Browser;
  beforeAll(async () => {
    browser = await openBrowser();
  });
  afterAll(() => browser?.close());

  it.each([
    [1280, 'light'],
    [390, 'dark'],
  ] as const)(
    'is seen whole at %i pixels, %s, without a fault of accessibility',
    async (width, colorScheme) => {
      const shown = await browser.newPage({ viewport: { width, height: 900 }, colorScheme });
      await shown.setContent(page);
      expect(await accessibilityFaults(shown)).toEqual([]);
      expect(await shown.evaluate('document.documentElement.scrollWidth')).toBeLessThanOrEqual(width);
      const bars = await shown.locator('.share .lost').all();
      expect(bars).toHaveLength(2);
      const boxes = await Promise.all(bars.map((bar) => bar.boundingBox()));
      for (const box of boxes) expect(box!.x + box!.width).toBeLessThanOrEqual(width);
      // The bars are as long as the shares of 92 % and 11 % say.
      expect(boxes[0]!.width / boxes[1]!.width).toBeCloseTo(0.92 / 0.11, 0);
      const share = await shown.getByRole('cell', { name: '92 %' }).boundingBox();
      expect(share!.x + share!.width).toBeLessThanOrEqual(width);
      await shown.close();
    },
  );
});
