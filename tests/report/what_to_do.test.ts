import { describe, expect, it } from 'vitest';
import { whatToDo } from '../../src/report/what_to_do.js';
import { harmful, hostileNames } from './hostile.js';
import { requirement } from './sample_run.js';

const spec = { file: 'specs/axis.pawl.yaml', provenance: undefined };
const comparison = { attribution: [{ name: 'ki', share: 0.9, points: 0.4 }] } as never;
const broken = { kind: 'broken', why: 'a plant within the bounds breaks it' } as const;
const slipped = { kind: 'slipped', why: 'the firmware lost 24 points' } as const;

describe('what to do about a requirement', () => {
  it('is nothing where it blocks nothing', () => {
    expect(whatToDo(requirement({ verdict: { kind: 'met' } }), spec)).toBeUndefined();
    const waiver = { reason: 'a motor is on its way', until: '2027-03-01', letsThrough: true };
    expect(whatToDo(requirement({ verdict: broken, waiver }), spec)).toBeUndefined();
  });

  it('is to mend the coefficient with most of the loss, or to say why the spec changes, and how to look', () => {
    expect(whatToDo(requirement({ name: 'AZ-1', verdict: broken, comparison }), spec)).toBe(
      "mend ki, or change the limit or the bounds in the spec and say why; 'pawl replay DIR AZ-1' runs that plant again alone, DIR being the folder of the reports",
    );
    expect(whatToDo(requirement({ verdict: broken }), spec)).toMatch(/^mend the firmware, or /);
  });

  it('is to win a slip back or to latch the same spec and image', () => {
    const provenance = { image: 'out/new.elf', insteadOfSpecs: true } as never;
    expect(whatToDo(requirement({ verdict: slipped, comparison }), { ...spec, provenance })).toBe(
      "win the headroom back with ki, or accept the loss: 'pawl latch specs/axis.pawl.yaml --image out/new.elf --reason TEXT'",
    );
  });

  it('lets nothing pass that could not be judged', () => {
    const verdict = { kind: 'unjudged', why: 'the loop is open there' } as const;
    expect(whatToDo(requirement({ verdict }), spec)).toContain('does not pass');
  });

  it.each(Object.entries(hostileNames))('is one harmless line for a hostile name: %s', (_, name) => {
    const line = whatToDo(requirement({ name, verdict: broken }), { ...spec, file: name });
    expect(line).not.toMatch(harmful);
    expect(line).not.toContain('\n');
  });
});
