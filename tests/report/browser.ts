import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { type Browser, chromium, type Page } from 'playwright-core';

/** Where Debian puts it. */
export const chromiumPath = '/usr/bin/chromium';

/** A real Chromium without a window, cut off from everything but the page. */
export function openBrowser(): Promise<Browser> {
  return chromium.launch({
    executablePath: chromiumPath,
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

const axeSource = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');

/** What axe-core finds wrong with a page, one line each. The page's own policy allows no scripts, the driver's may run. */
export async function accessibilityFaults(page: Page): Promise<string[]> {
  await page.evaluate(axeSource);
  return page.evaluate(async () => {
    // biome-ignore lint/suspicious/noExplicitAny: the checker puts itself there when it is loaded.
    const { violations } = await (globalThis as any).axe.run(document, { resultTypes: ['violations'] });
    return violations.flatMap(
      ({ id, nodes }: { id: string; nodes: { html: string; failureSummary: string }[] }) =>
        nodes.map((node) => `${id}: ${node.html.slice(0, 200)} ${node.failureSummary}`),
    );
  });
}
