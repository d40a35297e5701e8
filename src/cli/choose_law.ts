import type { Candidate } from '../firmware/index.js';
import { indexText } from '../report/coefficient_table.js';

/** The parts of a law that a coefficient may take. */
export type Role = 'kp' | 'ki' | 'kd' | 'period' | 'factor';

/** A law that fits the names in an image, and a plant that it controls well. */
export interface Law {
  roles: Partial<Record<Role, Candidate>>;
  units: Partial<Record<Role, string>>;
  /** The command's definition in the spec's words. */
  block: string;
  /** Sampling period: a coefficient's name, or a time. */
  every: string;
  plant: { gain: number; response: number };
  /** s */
  lasts: number;
}

/** How firmware calls the parts of a law (common practice, from memory). */
const namesOf: Record<Exclude<Role, 'factor'>, RegExp> = {
  kp: /^(k_?p|p|p_?gain|gain_?p|proportional(_?gain)?)$/i,
  ki: /^(k_?i|i_?gain|gain_?i|integral(_?gain)?)$/i,
  kd: /^(k_?d|d_?gain|gain_?d|derivative(_?gain)?)$/i,
  period: /^((sampl(e|ing)_?)?(period|time)|dt|ts)_?(us|ms|s)$/i,
};
const unitOfName = /_?(us|ms|s)$/i;
/** Periods that a controller may have, s. */
const plausiblePeriod = [1e-6, 10];
/** Without a period in the image, s. */
const guessedPeriod = 0.01;
/** The plant's time constant in sampling periods: slow enough to be controlled well, quick enough to be run often. */
const periodsOfResponse = 100;
/** The derivative of a PID needs a filter; at this share of the sampling rate it does no harm. */
const derivativeShare = 0.05;

/**
 * Chooses by name: a PID where there is a proportional gain, else the first usable number as a plain factor; undefined
 * where no number in the image is usable, for all are zero or not finite.
 */
export function chooseLaw(found: readonly Candidate[]): Law | undefined {
  const numbers = found.flatMap(singleNumbers).filter((one) => isUsable(numberIn(one)));
  const period = numbers.find((one) => hasName(one, 'period') && isPlausiblePeriod(one));
  const gains = numbers.filter((one) => one !== period);
  if (gains.length === 0) return undefined;
  const seconds = period ? secondsIn(period) : guessedPeriod;
  const kp = gains.find((one) => hasName(one, 'kp'));
  const beside = (role: Role): Candidate | undefined =>
    gains.find((one) => hasName(one, role) && parentOf(one) === parentOf(kp!));
  const response = rounded(periodsOfResponse * seconds);
  const law = kp ? pidLaw(kp, beside('ki'), beside('kd'), seconds, response) : factorLaw(gains[0]);
  return {
    roles: { ...law.roles, ...(period && { period }) },
    units: { ...law.units, ...(period && { period: unitOf(period) }) },
    block: law.block,
    every: period ? 'period' : `${guessedPeriod * 1000} ms`,
    plant: { gain: law.gain, response },
    lasts: rounded(8 * response),
  };
}

interface LawParts extends Pick<Law, 'roles' | 'units' | 'block'> {
  /** The plant's gain. */
  gain: number;
}

/** @param response time constant of the plant, s. */
function pidLaw(
  kp: Candidate,
  ki: Candidate | undefined,
  kd: Candidate | undefined,
  period: number,
  response: number,
): LawParts {
  const roles = { kp, ...(ki && { ki }), ...(kd && { kd }) };
  const settings = Object.keys(roles).map((role) => `${role}: ${role}`);
  if (kd) settings.push(`derivative_corner: ${rounded(derivativeShare / period)} Hz`);
  const share = (one: Candidate | undefined): number => (one ? Math.abs(numberIn(one) / numberIn(kp)) : 0);
  return {
    roles,
    units: { ...(ki && { ki: '1/s' }), ...(kd && { kd: 's' }) },
    block: `{ pid: { ${settings.join(', ')} }, of: error }`,
    gain: gainFor(kp, loopGain(response, share(ki), share(kd))),
  };
}

function factorLaw(factor: Candidate): LawParts {
  return { roles: { factor }, units: {}, block: '{ value: factor * error }', gain: gainFor(factor, 1) };
}

/**
 * The loop gain with which a lag neither swings under its integral nor is driven hard by its derivative: of the closed
 * loop's T·s² + (1 + K)·s + K·r the damping is above 0.7 where K·T·r is at most a half, and above the lag's corner the loop
 * has a gain of K·d/T.
 * @param integral r = ki/kp, 1/s. @param derivative d = kd/kp, s.
 */
function loopGain(response: number, integral: number, derivative: number): number {
  const againstSwinging = integral > 0 ? 0.5 / (response * integral) : 1;
  const againstDrive = derivative > 0 ? (0.2 * response) / derivative : 1;
  return Math.min(1, againstSwinging, againstDrive);
}

/** The plant's gain with which the loop has so much, of the same sign. */
function gainFor(one: Candidate, loop: number): number {
  return rounded(loop / numberIn(one));
}

/** A table is as many numbers, each at its index. */
function singleNumbers(one: Candidate): Candidate[] {
  const { coefficient, request } = one;
  if (coefficient.shape.length === 0) return [one];
  return coefficient.elements.map((element, at) => {
    const path = coefficient.path + indexText(at, coefficient.shape);
    return {
      ...one,
      request: { ...request, at: path },
      coefficient: { ...coefficient, path, elements: [element], shape: [] },
    };
  });
}

function hasName({ coefficient }: Candidate, role: Role): boolean {
  return role !== 'factor' && namesOf[role].test(/[^.:]*$/.exec(coefficient.path)![0]);
}

function parentOf({ coefficient }: Candidate): string {
  return coefficient.path.replace(/[^.:]*$/, '');
}

function numberIn({ coefficient }: Candidate): number {
  return coefficient.elements[0].value;
}

function isUsable(value: number): boolean {
  return Number.isFinite(value) && value !== 0;
}

function isPlausiblePeriod(one: Candidate): boolean {
  const seconds = secondsIn(one);
  return seconds >= plausiblePeriod[0] && seconds <= plausiblePeriod[1];
}

function secondsIn(period: Candidate): number {
  return numberIn(period) * { us: 1e-6, ms: 1e-3, s: 1 }[unitOf(period)];
}

function unitOf({ coefficient }: Candidate): 'us' | 'ms' | 's' {
  return unitOfName.exec(coefficient.path)![1].toLowerCase() as 'us' | 'ms' | 's';
}

/** To two digits, as people write a first guess. */
export function rounded(value: number): number {
  return Number(value.toPrecision(2));
}
