import { describe, expect, it } from 'vitest';
import { verdictOf } from '../../src/verdict/verdict_of.js';
import { broken, independent, met, requirementOf, unjudged } from './judgements.js';

describe('the verdict on a requirement', () => {
  it('for all plants: one plant that breaks is enough', () => {
    const verdict = verdictOf(requirementOf(), met(0.5), broken(-0.1), independent(1000, 0), 0.95);
    expect(verdict).toMatchObject({ kind: 'broken', headroom: -0.1 });
  });

  it('for all plants: one plant that cannot be judged is enough against it', () => {
    const verdict = verdictOf(requirementOf(), met(0.5), unjudged('no rest'), independent(1000, 0), 0.95);
    expect(verdict).toEqual({ kind: 'unjudged', why: 'no rest' });
  });

  it('at nominal: other plants do not count', () => {
    const requirement = requirementOf({ holdsFor: 'nominal' });
    expect(verdictOf(requirement, met(0.2), broken(-1), independent(0, 9), 0.95)).toEqual({
      kind: 'met',
      headroom: 0.2,
    });
    expect(verdictOf(requirement, broken(-0.2), broken(-1), independent(0, 0), 0.95)).toMatchObject({
      kind: 'broken',
    });
  });

  // Wilks 1941: 299 plants, none broken, show 99 % with 95 % confidence; 298 do not.
  it('for a share: needs as many plants as Wilks asks for', () => {
    const requirement = requirementOf({ holdsFor: 0.99 });
    expect(verdictOf(requirement, met(1), met(0.1), independent(299, 0), 0.95).kind).toBe('met');
    const few = verdictOf(requirement, met(1), met(0.1), independent(298, 0), 0.95);
    expect(few.kind).toBe('unjudged');
    expect(few).toHaveProperty('why', expect.stringContaining('298'));
    expect(few).toHaveProperty('why', expect.stringContaining('299'));
  });

  // Wilks 1941, second order: with one broken 473 are needed for 99 % at 95 %.
  it('for a share: allows breaks as long as the bound reaches it', () => {
    const requirement = requirementOf({ holdsFor: 0.99 });
    expect(verdictOf(requirement, met(1), broken(-0.1), independent(472, 1), 0.95).kind).toBe('met');
    expect(verdictOf(requirement, met(1), broken(-0.1), independent(471, 1), 0.95).kind).toBe('broken');
  });

  it('for a share: a plant that cannot be judged is not a plant that holds', () => {
    const requirement = requirementOf({ holdsFor: 0.9 });
    const plants = independent(1000, 0, 'not a number');
    expect(verdictOf(requirement, met(1), met(0.1), plants, 0.95)).toEqual({
      kind: 'unjudged',
      why: 'not a number',
    });
  });

  it('for a share: no independent plants at all say nothing', () => {
    expect(verdictOf(requirementOf({ holdsFor: 0.9 }), met(1), met(1), independent(0, 0), 0.95).kind).toBe(
      'unjudged',
    );
  });
});
