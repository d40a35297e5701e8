import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { BlockUse, Workshop } from './block.js';

/** A derivative's gain as the equations use it: on the change of its input, and on its filter where it has one. */
export interface DerivativeGain {
  /** kd, in seconds or samples. */
  gain: Node;
  /** kd·ω, ω and T of the filter. */
  filter: { drive: Node; corner: Node; period: Node } | undefined;
  /** By what the change of the input is divided where there is no filter; nothing where the gain counts samples. */
  period: Node | undefined;
}

/** The gains of a law, whatever its form, as its equations use them. */
export interface PidGains {
  form: 'parallel' | 'standard' | 'interacting';
  kp: Node | undefined;
  /** What the integral gains at one instant for an input of one. */
  integralStep: Node | undefined;
  derivative: DerivativeGain | undefined;
}

const ofForm = {
  parallel: ['ki', 'kd'],
  times: ['integral_time', 'derivative_time'],
};

/**
 * The gains of a use of `pid`.
 * @throws {LoopError} where gains do not belong to the form, or there is none.
 */
export function gainsOf(use: BlockUse, workshop: Workshop): PidGains {
  const form = (use.word('form') ?? 'parallel') as PidGains['form'];
  checkGains(use, form);
  checkIntegral(use);
  const { arithmetic } = workshop;
  const kp = use.setting('kp');
  const integralStep = form === 'parallel' ? stepOfGain(use, workshop) : stepOfTime(use, workshop, kp!);
  const time = use.setting('derivative_time');
  const kd =
    form === 'parallel'
      ? use.setting('kd')
      : form === 'standard'
        ? time && arithmetic.multiply(kp!, time)
        : time;
  return { form, kp, integralStep, derivative: kd && derivativeGain(use, workshop, kd) };
}

function checkGains(use: BlockUse, form: PidGains['form']): void {
  const foreign = form === 'parallel' ? ofForm.times : ofForm.parallel;
  const expected = form === 'parallel' ? ofForm.parallel : ofForm.times;
  const wrong = foreign.find((name) => use.setting(name));
  if (wrong) {
    throw new LoopError(
      `pid of '${use.name}' in ${form} form got '${wrong}'; expected ${expected.join(' and ')}, or another 'form'`,
      use.place,
    );
  }
  if (form !== 'parallel' && !use.setting('kp')) {
    throw new LoopError(
      `pid of '${use.name}' in ${form} form needs kp, which multiplies all of it`,
      use.place,
    );
  }
  if (!['kp', ...expected].some((name) => use.setting(name))) {
    throw new LoopError(`pid of '${use.name}' has no gain: give at least one of kp, ki, kd`, use.place);
  }
}

/** What acts on the integral needs one. */
function checkIntegral(use: BlockUse): void {
  if (use.setting('ki') ?? use.setting('integral_time')) return;
  const idle = ['bumpless_start', 'track', 'pull_back_time'].find((name) => use.setting(name));
  if (idle) {
    throw new LoopError(
      `pid of '${use.name}' has '${idle}', which acts on the integral, but no integral: give ki or integral_time`,
      use.place,
    );
  }
}

/** The period with which the law computes, or nothing where its gains count samples. */
export function lawPeriod(use: BlockUse, workshop: Workshop): Node | undefined {
  return use.word('gains') === 'per_sample' ? undefined : periodOf(use, workshop);
}

function periodOf(use: BlockUse, workshop: Workshop): Node {
  return use.setting('assumed_period') ?? workshop.period();
}

function stepOfGain(use: BlockUse, workshop: Workshop): Node | undefined {
  const ki = use.setting('ki');
  const period = lawPeriod(use, workshop);
  return ki && period ? workshop.arithmetic.multiply(ki, period) : ki;
}

function stepOfTime(use: BlockUse, workshop: Workshop, kp: Node): Node | undefined {
  const { arithmetic } = workshop;
  const time = use.setting('integral_time');
  const period = lawPeriod(use, workshop);
  return time && arithmetic.divide(period ? arithmetic.multiply(kp, period) : kp, time);
}

function derivativeGain(use: BlockUse, workshop: Workshop, gain: Node): DerivativeGain {
  const { arithmetic } = workshop;
  const corner = use.setting('derivative_corner');
  const period = lawPeriod(use, workshop);
  if (!corner) return { gain, filter: undefined, period };
  const filterPeriod = periodOf(use, workshop);
  const drive = arithmetic.multiply(gain, period ? corner : arithmetic.multiply(corner, filterPeriod));
  return { gain, period, filter: { drive, corner, period: filterPeriod } };
}
