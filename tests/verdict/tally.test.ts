import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PlantOrigin } from '../../src/perturb/plants.js';
import type { Judgement } from '../../src/verdict/judge.js';
import { Tally, type TriedPlant } from '../../src/verdict/tally.js';
import { broken, met, unjudged } from './judgements.js';

const nominal = [0, 0, 0];

function tried(judgement: Judgement, origin: PlantOrigin = 'independent', values = [1, 1, 1]): TriedPlant {
  return {
    plant: { origin, values: Float64Array.from(values) },
    result: { kind: 'value', value: 0 },
    judgement,
  };
}

function tallyOf(...plants: TriedPlant[]): Tally {
  const tally = new Tally(nominal);
  for (const plant of plants) tally.add(plant);
  return tally;
}

describe('what is kept of the plants tried', () => {
  it('counts every plant, and the independent ones apart', () => {
    const tally = tallyOf(
      tried(met(0.5), 'nominal', nominal),
      tried(broken(-0.1), 'corner'),
      tried(met(0.3)),
      tried(broken(-0.2)),
      tried(unjudged('no rest')),
      tried(unjudged('another')),
    );
    expect(tally.counts).toEqual({ tried: 6, broken: 2, unjudged: 2 });
    expect(tally.independent).toEqual({ tried: 4, broken: 1, unjudged: 2, why: 'no rest' });
    expect(tally.nominal?.judgement).toEqual(met(0.5));
  });

  it('keeps the worst, worst first, however many there are', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 1, maxLength: 60 }),
        (ranks) => {
          const tally = tallyOf(...ranks.map((rank) => tried(rank < 0 ? broken(rank) : met(rank))));
          const sorted = [...ranks].sort((a, b) => a - b).slice(0, 8);
          expect(tally.worst.map(({ judgement }) => judgement.rank)).toEqual(sorted);
        },
      ),
      { seed: 121 },
    );
  });

  it('of equals keeps the one tried first at the front', () => {
    const [first, second] = [tried(met(0.2)), tried(met(0.2))];
    expect(tallyOf(first, second).worst[0]).toBe(first);
  });

  it('takes what cannot be judged for worse than any number', () => {
    expect(tallyOf(tried(broken(-5)), tried(unjudged('w'))).worst[0].judgement.kind).toBe('unjudged');
  });

  it('remembers the counterexample that moves the fewest parameters', () => {
    const simple = tried(broken(-0.01), 'single', [1, 0, 0]);
    const tally = tallyOf(
      tried(broken(-0.9)),
      simple,
      tried(broken(-0.5), 'single', [0, 1, 0]),
      tried(met(1)),
    );
    expect(tally.simplest).toBe(simple);
    expect(tallyOf(tried(met(1))).simplest).toBeUndefined();
  });

  it('puts a confirmed plant where it then belongs', () => {
    const [bad, other] = [tried(broken(-0.5)), tried(broken(-0.2))];
    const tally = tallyOf(bad, other);
    tally.confirm(bad, tried(broken(-0.1)));
    expect(tally.worst.map(({ judgement }) => judgement.rank)).toEqual([-0.2, -0.1]);
  });
});
