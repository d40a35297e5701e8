import { describe, it } from 'vitest';
import { plantsNeeded, upperBoundOfShare } from '../../src/perturb/binomial_bound.js';
import { expectPublished, publishedCase } from '../published.js';

// Sources: Clopper and Pearson 1934, Hanley and Lippman-Hand 1983, Wilks 1941, Tempo, Bai and Dabbene 1997; the figures are
// in reference/published. The exact bounds there have an absolute tolerance of 1e-10, well inside six digits.
describe('the exact bound of a share against published figures', () => {
  it.each(['H01', 'H02', 'H03', 'H04'])('%s: both ends of a two-sided interval', (id) => {
    const { failures, trials, confidence } = publishedCase(id).given;
    const oneSided = 1 - (1 - confidence) / 2;
    const upper = upperBoundOfShare(failures, trials, oneSided);
    const lower = 1 - upperBoundOfShare(trials - failures, trials, oneSided);
    expectPublished(id, 'exact_interval', [lower, upper]);
  });

  it('H05: after no failures', () => {
    const { trials, confidence } = publishedCase('H05').given;
    const bounds = trials.map((tried: number) => upperBoundOfShare(0, tried, confidence));
    expectPublished('H05', 'exact_upper_bound', bounds);
  });

  it('H06: the least number of plants, none of which fails', () => {
    const { coverages, confidences } = publishedCase('H06').given;
    const needed = coverages.map((share: number, i: number) => plantsNeeded(1 - share, confidences[i]));
    expectPublished('H06', 'one_sided_first_order', needed);
  });

  it.each([
    [1, 'one_sided_second_order'],
    [2, 'one_sided_third_order'],
  ])('H06: with %i failures the bound first reaches the coverage at the published number', (broken, name) => {
    const { coverages, confidences } = publishedCase('H06').given;
    const needed = coverages.map((share: number, i: number) => {
      let tried = broken + 1;
      while (upperBoundOfShare(broken, tried, confidences[i]) > 1 - share) tried++;
      return tried;
    });
    expectPublished('H06', name as string, needed);
  });

  it('H07: the sample sizes of an estimated worst case', () => {
    const { accuracies, risks } = publishedCase('H07').given;
    const needed = accuracies.map((accuracy: number, i: number) => plantsNeeded(accuracy, 1 - risks[i]));
    expectPublished('H07', 'samples', needed);
  });
});
