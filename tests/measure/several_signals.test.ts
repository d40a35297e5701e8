import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { LoopError } from '../../src/loop/loop.js';
import { measureSmall, type SmallLoop, smallValues } from '../small_loop.js';

const T = 0.01;
const margins = ['gain_margin', 'phase_margin', 'modulus_margin', 'disc_margin', 'stability'] as const;
const units: Record<string, string> = { stability: '0 1/s, scale: 1 1/s', delay_margin: '1 us' };

/** The values of measures with the loop opened somewhere. */
function opened(loop: SmallLoop, at: string, measures: readonly string[] = margins): number[] {
  const requirements = measures.map(
    (name, i) => `{ name: R${i}, at: ${at}, measure: ${name}, at_least: ${units[name] ?? '0.1'} }`,
  );
  return smallValues({ ...loop, requirements });
}

function expectNear(actual: readonly number[], expected: readonly number[], within = 1e-9): void {
  actual.forEach((value, i) => {
    if (value === expected[i]) return;
    expect(Math.abs(value / expected[i] - 1), `${i}: ${value} for ${expected[i]}`).toBeLessThan(within);
  });
}

/**
 * Sampled integrators y' = B·duty, pushed by −k·y: opened at the actuators L is k·T·B/(z − 1), of which everything follows from
 * B; positive gains x of the diagonal are those of single integrators (zero-order hold of an integrator; Åström and
 * Wittenmark 1997).
 */
function axes([[a, b], [c, d]]: [[number, number], [number, number]]): SmallLoop {
  const rate = (pan: number, tilt: number): string =>
    `(${pan / T} 1/s)*duty_pan + (${tilt / T} 1/s)*duty_tilt`;
  return {
    inputs: 'u: {}\nv: {}',
    plant: `y: { integral: "${rate(a, b)}" }\nz: { integral: "${rate(c, d)}" }`,
    sensors: 'seen_y: { of: y }\nseen_z: { of: z }',
    controllers:
      'law:\n  every: 10 ms\n  signals:\n    pan: { value: u - seen_y }\n    tilt: { value: v - seen_z }',
    actuators: 'duty_pan: { of: pan }\nduty_tilt: { of: tilt }',
    requirements: [],
  };
}
const both = '[duty_pan, duty_tilt]';

describe('two loops that know nothing of one another, opened at once', () => {
  it.each([
    [0.4, 0.3],
    [0.4, 0.4],
    [0.1, 1.7],
  ])('have the smaller of their margins: gains %f and %f', (x, y) => {
    const loop = axes([
      [x, 0],
      [0, y],
    ]);
    const all = [...margins, 'delay_margin'];
    const [pan, tilt] = [opened(loop, 'duty_pan', all), opened(loop, 'duty_tilt', all)];
    const together = opened(loop, both, all);
    expectNear(
      together,
      pan.map((value, i) => Math.min(value, tilt[i])),
    );
    // Of the larger gain: 2/x, and 1 − x/2 at half the sampling frequency.
    expectNear([together[0], together[2]], [2 / Math.max(x, y), 1 - Math.max(x, y) / 2]);
  });
});

describe('two loops that act upon one another, opened at once', () => {
  // With B = r·(rotation by θ) the eigenvalues of L are r·e^{±jθ}/(z − 1), and it is normal: its singular values are their sizes.
  const turned = (r: number, angle: number): SmallLoop =>
    axes([
      [r * Math.cos(angle), -r * Math.sin(angle)],
      [r * Math.sin(angle), r * Math.cos(angle)],
    ]);

  it('have the margins of the turned integrator', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.1, max: 0.6, noNaN: true }),
        fc.integer({ min: 0, max: 100 }),
        (r, hundredths) => {
          const angle = hundredths / 100;
          const [gain, phase, modulus, delay] = opened(turned(r, angle), both, [
            ...margins.slice(0, 3),
            'delay_margin',
          ]);
          // |1 − c·r·e^{jθ}| = 1 at c = 2·cos(θ)/r.
          expectNear([gain], [(2 * Math.cos(angle)) / r]);
          // |1 − r·e^{j(θ + φ)}| = 1 where cos(θ + φ) = r/2.
          expectNear([phase], [Math.acos(r / 2) - angle], 1e-8);
          expectNear([delay], [((Math.acos(r / 2) - angle) * T) / (2 * Math.asin(r / 2))], 1e-8);
          // 1/(z − 1) = −1/2 + jt on the unit circle, so that L lies on a straight line, at this distance from −1.
          expectNear([modulus], [Math.cos(angle) - r / 2]);
        },
      ),
      { numRuns: 12 },
    );
  });

  it('may be near the edge together where each alone is far from it', () => {
    // A coupling one way only is part of no single loop, so that none of them feels it: 1 − 0.2/2 each.
    const loop = axes([
      [0.2, 4],
      [0, 0.2],
    ]);
    const [pan, tilt] = [opened(loop, 'duty_pan')[2], opened(loop, 'duty_tilt')[2]];
    expectNear([pan, tilt], [0.9, 0.9]);
    expect(opened(loop, both)[2]).toBeLessThan(0.2);
  });

  it('allow gains that differ within the disc margin, whatever they are', () => {
    const coupling: [[number, number], [number, number]] = [
      [0.5, 0.35],
      [-0.4, 0.6],
    ];
    const [disc] = opened(axes(coupling), both, ['disc_margin']);
    expect(disc).toBeGreaterThan(0.3);
    const [low, high] = [(2 - disc) / (2 + disc), (2 + disc) / (2 - disc)];
    const factor = fc.double({ min: 0, max: 1, noNaN: true }).map((share) => low * (high / low) ** share);
    fc.assert(
      fc.property(factor, factor, (pan, tilt) => {
        const scaled = axes(coupling.map(([a, b]) => [a * pan, b * tilt]) as typeof coupling);
        expect(opened(scaled, both, ['stability'])[0]).toBeGreaterThan(0);
      }),
      { numRuns: 25 },
    );
  });
});

describe('the delay margin of two signals', () => {
  const coupled = (factor: number): SmallLoop =>
    axes([
      [0.1 * factor, 0.04 * factor],
      [-0.06 * factor, 0.08 * factor],
    ]);
  /** Beside them a slower controller, which is no part of the loop or, with a gain, closes another one around the first axis. */
  const withSlower = (loop: SmallLoop, every: string, gain: number): SmallLoop => ({
    ...loop,
    plant: `${loop.plant}\nx: { integral: third*(1 1/s) }`,
    sensors: `${loop.sensors}\nseen_x: { of: x }\nslow_y: { of: y }`,
    controllers: `${loop.controllers!.replace('u - seen_y', `wanted - seen_y`)}\nslower:\n  every: ${every}\n  signals:\n    more: { value: u - seen_x }\n    wanted: { value: u - ${gain}*slow_y }`,
    actuators: `${loop.actuators}\nthird: { of: more }`,
  });
  const late = (loop: SmallLoop, periods: number): SmallLoop => {
    const delay = periods > 0 ? `\n  delay: ${10 * periods} ms` : '';
    return { ...loop, controllers: loop.controllers!.replace('every: 10 ms', `every: 10 ms${delay}`) };
  };
  const delayMargin = (loop: SmallLoop): number[] => opened(loop, both, ['delay_margin']);

  // A delay of whole periods is one also between the instants, so that a gain with which it is the margin can be sought.
  it.each<[string, (factor: number) => SmallLoop]>([
    ['of one rate', coupled],
    [
      'with a loop of half their rate around one of them',
      (factor) => withSlower(coupled(factor), '20 ms', 0.8),
    ],
    ['with a loop of a third of their rate', (factor) => withSlower(coupled(factor), '30 ms', 0.4)],
  ])('brings them to the edge of stability, %s', (_, loop) => {
    for (const periods of [1, 2]) {
      const [factor] = opened(late(loop(1), periods), both, ['gain_margin']);
      expect(factor).toBeGreaterThan(2);
      expectNear(delayMargin(loop(factor)), [periods * T], 1e-7);
    }
  });

  it('does not know of a controller that is no part of the loop', () => {
    const alone = delayMargin(coupled(3));
    for (const every of ['20 ms', '30 ms', '40 ms'])
      expectNear(delayMargin(withSlower(coupled(3), every, 0)), alone, 1e-8);
  });

  it('is that of each of two equal axes that know nothing of one another, whatever is around them', () => {
    const equal = axes([
      [0.3, 0],
      [0, 0.3],
    ]);
    const cascades = (every: string): SmallLoop => {
      const loop = withSlower(equal, every, 0.3);
      const outer = '    wanted_z: { value: v - 0.3*slow_z }';
      return {
        ...loop,
        sensors: `${loop.sensors}\nslow_z: { of: z }`,
        controllers: `${loop.controllers!.replace('v - seen_z', 'wanted_z - seen_z')}\n${outer}`,
      };
    };
    for (const every of ['10 ms', '20 ms', '50 ms'])
      expectNear(delayMargin(cascades(every)), opened(cascades(every), 'duty_tilt', ['delay_margin']), 1e-9);
  });

  it('is none where they change at different rates, and says so', () => {
    const requirements = ['{ name: A, at: [duty_pan, third], measure: delay_margin, at_least: 1 ms }'];
    const [result] = measureSmall({ ...withSlower(coupled(1), '20 ms', 0), requirements });
    expect(result).toMatchObject({
      kind: 'unformed',
      why: expect.stringContaining('change at different rates, every 0.01 s and every 0.02 s'),
    });
  });
});

describe('a signal that is computed from another at the same instant', () => {
  // Of one integrator opened at its sensor and at its command: L = [[0, k], [−P, 0]] but for the order, so that det(I + cL) is
  // 1 + c²·k·P: the same factor or phase acts twice.
  const integrator: SmallLoop = {
    inputs: 'u: {}',
    plant: 'y: { integral: drive*(1 1/s) }',
    sensors: 'seen: { of: y }',
    controllers: 'law:\n  every: 10 ms\n  signals:\n    command: { value: 40*(u - seen) }',
    actuators: 'drive: { of: command }',
    requirements: [],
  };

  it('has the root of the gain margin and half of the phase margin', () => {
    const [gain, phase, , , decay] = opened(integrator, 'drive');
    for (const at of ['[seen, command]', '[command, seen]', '[drive, seen]']) {
      const [bothGain, bothPhase, , , bothDecay] = opened(integrator, at);
      expectNear([bothGain, bothPhase, bothDecay], [Math.sqrt(gain), phase / 2, decay]);
    }
    expectNear([opened(integrator, '[seen, command, drive]')[0]], [gain ** (1 / 3)]);
  });
});

describe('a cascade of two rates, opened in both loops at once', () => {
  const cascade = (factor = 1): SmallLoop => ({
    inputs: 'u: {}',
    plant: 'speed: { lag: 50 ms, of: drive, unit: 1/s, gain: 1 1/s }\ny: { integral: speed }',
    sensors: 'fast: { of: speed, unit: 1/s }\nslow: { of: y }',
    controllers: [
      `outer:\n  every: 10 ms\n  signals:\n    wanted: { value: (${8 * factor} 1/s)*(u - slow), unit: 1/s }`,
      `inner:\n  every: 2.5 ms\n  delay: 0.5 ms\n  signals:\n    command: { value: (${2 * factor} s)*(wanted - fast) }`,
    ].join('\n'),
    actuators: 'drive: { of: command }',
    requirements: [],
  });

  it('is at the edge of stability with its gain margin on both', () => {
    const [gain, , , , decay] = smallValuesAt(cascade(), '[wanted, drive]');
    expect(gain).toBeGreaterThan(1.5);
    expect(gain).toBeLessThan(smallValuesAt(cascade(), 'wanted')[0]);
    expectNear([decay], [smallValuesAt(cascade(), 'slow')[4]], 1e-8);
    const decayWith = (factor: number): number => opened(cascade(factor), 'slow', ['stability'])[0];
    expect(decayWith(gain * 0.999)).toBeGreaterThan(0);
    expect(decayWith(gain * 1.001)).toBeLessThan(0);
  });

  const smallValuesAt = (loop: SmallLoop, at: string): number[] =>
    opened(loop, at, ['gain_margin', 'phase_margin', 'phase_margin', 'phase_margin', 'stability']);
});

describe('where the loop is opened', () => {
  const thousandths = (from: number, to: number) =>
    fc.integer({ min: from, max: to }).map((one) => one / 1000);
  const [own, entry] = [thousandths(200, 700), thousandths(-300, 300)];
  const coupled = fc.tuple(own, entry, entry, own).map(([a, b, c, d]) =>
    axes([
      [a, b],
      [c, d],
    ]),
  );

  it('may be listed in any order, to the last bit', () => {
    fc.assert(
      fc.property(coupled, (loop) => {
        expect(opened(loop, '[duty_tilt, duty_pan]')).toEqual(opened(loop, both));
        expect(opened(loop, '[y, z]')).toEqual(opened(loop, '[seen_z, seen_y]'));
      }),
      { numRuns: 10 },
    );
  });

  it('may be a list of one, to the last bit', () => {
    fc.assert(
      fc.property(coupled, (loop) => {
        expect(opened(loop, '[duty_tilt]')).toEqual(opened(loop, 'duty_tilt'));
      }),
      { numRuns: 10 },
    );
  });

  it('one at a time never gives a smaller modulus margin than all at once, and the slowest of their modes is its', () => {
    // S of one signal with the others closed is an entry on the diagonal of S of all.
    fc.assert(
      fc.property(coupled, (loop) => {
        const [together, decay] = opened(loop, both, ['modulus_margin', 'stability']);
        const singles = ['duty_pan', 'duty_tilt'].map((at) =>
          opened(loop, at, ['modulus_margin', 'stability']),
        );
        for (const [single] of singles) expect(single).toBeGreaterThanOrEqual(together * (1 - 1e-9));
        // Where one axis knows nothing of the other its loop has the modes of its own alone. Equal modes are told apart by the
        // root of a rounding.
        expectNear([Math.min(...singles.map(([, own]) => own))], [decay], 1e-6);
      }),
      { numRuns: 20 },
    );
  });
});

describe('the unit in which a signal is written', () => {
  /** A mass pushed by a force, and a heater beside it that warms with its speed; each quantity in a unit of one's choice. */
  const loop = (unit: { length: string; force: string; range: string }): SmallLoop => ({
    inputs: `goal: { unit: ${unit.length} }`,
    plant: [
      'speed: { integral: (force - (3 N*s/m)*speed)/(2 kg) + heat*(0.02 m/(s^2*W)), unit: m/s }',
      'place: { integral: speed, unit: m }',
      'warm: { integral: (heat - warm*(2 W/K) + speed*(4 W*s/m))/(8 J/K), unit: K }',
    ].join('\n'),
    sensors: `seen: { of: place, unit: ${unit.length} }\nfelt: { of: warm, unit: K }`,
    controllers: [
      'law:\n  every: 50 ms\n  signals:',
      `    push: { value: (3 N/m)*(goal - seen), unit: ${unit.force}${unit.range} }`,
      '    warming: { value: (-5 W/K)*felt, unit: W, range: [-20 W, 20 W] }',
    ].join('\n'),
    actuators: 'force: { of: push, unit: N }\nheat: { of: warming, unit: W }',
    requirements: [],
  });
  const inSI = loop({ length: 'm', force: 'N', range: ', range: [-4 N, 6 N]' });

  it('changes no result', () => {
    const inOthers = loop({ length: 'mm', force: 'kN', range: ', range: [-4000 mN, 0.006 kN]' });
    for (const at of ['[push, warming]', '[warming, push]', '[force, push]', '[push, warming, seen]']) {
      const of = at.includes('seen') ? ['gain_margin', 'phase_margin', 'stability'] : margins;
      expectNear(opened(inOthers, at, of), opened(inSI, at, of), 1e-8);
    }
  });

  it('counts as a share of its range: one of twice the width lets the other be disturbed half as much', () => {
    const wide = loop({ length: 'm', force: 'N', range: ', range: [-8 N, 12 N]' });
    const [first, second] = [opened(inSI, '[push, warming]'), opened(wide, '[push, warming]')];
    expectNear([second[0], second[1], second[4]], [first[0], first[1], first[4]], 1e-9);
    expect(Math.abs(second[2] / first[2] - 1)).toBeGreaterThan(1e-3);
  });
});

describe('what cannot be', () => {
  const loop = axes([
    [0.4, 0.1],
    [0, 0.3],
  ]);

  it('is refused when the spec is read, with its place', () => {
    const requirements = [
      '{ name: A, at: [seen_y, seen_z], of: duty_pan, measure: noise_gain, at_most: 1 }',
      '{ name: B, at: [seen_y, seen_z], measure: crossover, at_least: 1 Hz }',
    ];
    expect(() => measureSmall({ ...loop, requirements })).toThrow(
      /small.pawl.yaml:22:20: `noise_gain` opens the loop at one signal, but `at` lists 2; name one of them\. Several at once can have stability, gain_margin.*\n.*:23:20: `crossover` opens/,
    );
  });

  it('is a sensor that two controllers sample, also as one of several', () => {
    const twice: SmallLoop = {
      ...loop,
      controllers: `${loop.controllers}\nother:\n  every: 20 ms\n  signals:\n    more: { value: seen_y }`,
      plant: `${loop.plant}\nx: { integral: third*(1 1/s) }`,
      actuators: `${loop.actuators}\nthird: { of: more }`,
    };
    expect(() => opened(twice, '[duty_tilt, seen_y]')).toThrow(LoopError);
    expect(() => opened(twice, '[duty_tilt, seen_y]')).toThrow("cannot be opened at 'seen_y'");
  });

  it('is a controller signal that nobody takes', () => {
    const idle: SmallLoop = {
      ...loop,
      controllers: `${loop.controllers}\n    shown: { value: 2*seen_y }`,
    };
    expect(() => opened(idle, '[duty_tilt, shown]')).toThrow(
      "cannot be opened at 'shown': no controller takes it",
    );
  });

  it('is a margin where one of the signals is at the end of its range', () => {
    const ended: SmallLoop = {
      ...loop,
      actuators: 'duty_pan: { of: pan }\nduty_tilt: { of: tilt, range: [0, 1] }',
    };
    const requirements = [`{ name: R, measure: gain_margin, at: ${both}, at_least: 2 }`];
    const [result] = measureSmall({ ...ended, requirements });
    expect(result).toMatchObject({ kind: 'unformed', why: expect.stringContaining("'duty_tilt' is at") });
  });
});
