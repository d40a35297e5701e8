import type { FinishedRun } from '../../src/verdict/run.js';
import { kp, parameter, plant, requirement, requirements, specRun, units, value } from './sample_run.js';

/** A run in which every text that comes from outside is the given one. */
export function hostileRun(name: string): FinishedRun {
  const place = { file: name, line: 3, column: 1 };
  const unit = { ...units.torque, text: name };
  const moved = { ...plant(value(0.3), -0.2, true), parameters: [parameter(name, 10, 30, -1, unit)] };
  const common = {
    name,
    place,
    signals: { of: name, to: name },
    scenario: name,
    reason: name,
    unit,
    claim: name,
  };
  const compared = { result: { kind: 'never', why: name, left: 1 } as const, headroom: undefined };
  const comparison = {
    ...{ latched: compared, rerun: undefined, why: name, today: compared, lost: undefined, maySlip: 0.05 },
    ...{ fromSpec: [name], attribution: [{ name: `${name} `, share: 1, lost: 0.2 }] },
  };
  const waiver = { reason: name, until: '2027-03-01', letsThrough: false, why: name };
  const never = { kind: 'never', why: name, left: 1 } as const;
  return {
    version: '0.1.0',
    specs: [
      specRun({
        file: name,
        loop: name,
        merge: name,
        sinceLatched: {
          path: name,
          reference: { reason: name, pawl: name },
          coefficients: [{ name, latched: [1], today: [2], elements: [0] }],
          spec: [name],
          law: [name],
        },
        provenance: {
          image: name,
          bytes: 1,
          sha256: 'ab'.repeat(32),
          buildId: name,
          compilers: [name],
          build: { command: [name], seconds: 1, output: name },
          buildSkipped: true,
        },
        scenarios: [{ name, lasts: 1 }],
        coefficients: [
          {
            name,
            place,
            unit,
            coefficient: {
              ...kp,
              path: name,
              type: name,
              declaredAt: { file: name, line: 1 },
              elements: [{ ...kp.elements[0], enumerator: name }],
            },
          },
        ],
        requirements: [
          requirement(common),
          requirement({
            ...common,
            verdict: { kind: 'broken', headroom: -0.2, why: name },
            worst: moved,
            comparison,
            waiver,
          }),
          requirement({
            ...common,
            verdict: { kind: 'broken', headroom: undefined, why: name },
            worst: { ...moved, result: never },
          }),
          requirement({ ...requirements[3], ...common, verdict: { kind: 'unjudged', why: name } }),
        ],
      }),
    ],
  };
}
