import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { publishedGroup } from '../published.js';

/** Where each published case is held, by file; a letter and `*` stands for every case of a group that is not named itself. */
const heldIn: Record<string, string[]> = {
  'firmware/half_precision.published.test.ts': ['I04'],
  'linear/sampled_equivalents.published.test.ts': ['B01', 'B02', 'B03', 'B04', 'B05', 'B06', 'B07', 'B08'],
  'linear/stability_limits.published.test.ts': ['C01', 'C02', 'C03', 'C04', 'C05', 'C06', 'D07', 'G08'],
  'linear/margins.published.test.ts': ['D01', 'D02', 'D03', 'D04', 'D05', 'D06', 'D08', 'D09', 'D10'],
  'linear/tuning_rules.published.test.ts': ['E*', 'E01', 'E02', 'E12', 'E13', 'E14'],
  'linear/largest_gain.test.ts': ['F01', 'F02', 'F03', 'F04', 'F05', 'F06'],
  'linear/polynomials.published.test.ts': ['G01', 'G02', 'G03', 'G04', 'G05', 'G06', 'G07'],
  'linear/exponential.test.ts': ['L01', 'L02', 'L03'],
  'linear/eigenvalues.test.ts': ['L04', 'L05'],
  'linear/frequency_figures.published.test.ts': ['K04'],
  'loop/arithmetic/number_formats.published.test.ts': ['I01', 'I02', 'I03', 'I05', 'I06', 'I07'],
  'loop/degenerate.test.ts': ['J01'],
  'loop/plant_blocks.test.ts': ['J06'],
  'measure/actuators.test.ts': ['J08'],
  'measure/second_order.published.test.ts': ['A*', 'A10', 'A11'],
  'perturb/binomial_bound.published.test.ts': ['H01', 'H02', 'H03', 'H04', 'H05', 'H06', 'H07'],
  'published_cases/guarantees.published.test.ts': ['K01', 'K02', 'K03'],
  'published_cases/plants_and_sampling.published.test.ts': ['J02', 'J03', 'J04', 'J05', 'J07', 'L06'],
  'published_cases/step_responses.published.test.ts': ['C07', 'C08', 'C09', 'E15', 'E16'],
};

const notHeld: Record<string, string> = {
  H08: 'the number of plants for an estimated probability is not computed: the exact binomial bound is claimed instead',
};

const ids = [...'ABCDEFGHIJKL'].flatMap((group) => publishedGroup(group).map(({ id }) => id));

function casesOf(entries: string[]): string[] {
  const named = Object.values(heldIn).flat();
  return entries.flatMap((entry) =>
    entry.endsWith('*') ? ids.filter((id) => id[0] === entry[0] && !named.includes(id)) : entry,
  );
}

describe('the published cases', () => {
  it('are each held somewhere, or named with the reason why not', () => {
    const held = Object.values(heldIn).flatMap(casesOf);
    expect([...held, ...Object.keys(notHeld)].sort()).toEqual([...ids].sort());
    expect(ids.length).toBe(101);
    expect(held.length).toBe(100);
  });

  it.each(Object.entries(heldIn))('are named in %s', (file, entries) => {
    const text = readFileSync(new URL(`../${file}`, import.meta.url), 'utf8');
    expect(text).toMatch(/expectPublished|\.expect\b|publishedCase\(/);
    for (const entry of entries) {
      const mention = entry.endsWith('*') ? `publishedGroup('${entry[0]}')` : entry;
      expect(text, `${file} names ${mention}`).toContain(mention);
    }
  });
});
