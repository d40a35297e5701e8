import { createHash } from 'node:crypto';
import type { Limit, Requirement, Spec } from '../../spec/spec.js';
import type { Reference } from './reference.js';

/** Digests of the named parts of a spec, without parameters and requirements, by words for people: "the scenario slew". */
export function partsOfSpec(spec: Spec): Record<string, string> {
  const named = (kind: string, all: readonly { name: string }[]): [string, string][] =>
    all.map((one) => [`the ${kind} ${one.name}`, digestOf(one)]);
  const { plants: _, seed: _seed, ...perturbation } = spec.perturbation;
  return Object.fromEntries([
    ...named('input', spec.inputs),
    ...named('plant signal', spec.plant),
    ...named('sensor', spec.sensors),
    ...named('controller', spec.controllers),
    ...named('actuator', spec.actuators),
    ...named('scenario', spec.scenarios),
    ['the perturbation', digestOf(perturbation)],
  ]);
}

/** A digest of what a requirement asks for, apart from its limit. */
export function askedOf(requirement: Requirement): string {
  const { measure, signals, in: scenario, quantities, statement, bounds, around, scale } = requirement;
  const atSeveral = requirement.atSeveral?.toSorted();
  return digestOf({ measure, signals, atSeveral, scenario, quantities, statement, bounds, around, scale });
}

/** What changed in a spec since the reference was written and bears on every requirement, in words for people. */
export function specChanges(reference: Reference, spec: Spec): string[] {
  const then = reference.parts;
  const now = partsOfSpec(spec);
  const parts = changedKeys(then, now, (a, b) => a === b).map(({ key, how }) => `${key}${how}`);
  const counts = reference.seed !== spec.perturbation.seed ? ['the seed of the plants'] : [];
  return [...parameterChanges(reference, spec), ...parts, ...counts];
}

/** What changed of one requirement, in words for people. */
export function requirementChanges(reference: Reference, requirement: Requirement): string[] {
  const then = reference.requirements[requirement.name];
  if (!then) return [];
  const changes: string[] = [];
  if (!sameLimit(then.limit, requirement.limit)) changes.push('its limit');
  if (then.holds_for !== requirement.holdsFor) changes.push('the plants it holds for');
  if (then.asked !== askedOf(requirement)) changes.push('what it measures');
  return changes;
}

/** What changed of all requirements, those that came and went among it, in words for people. */
export function changesOfRequirements(reference: Reference, { requirements }: Spec): string[] {
  const now = Object.fromEntries(requirements.map((one) => [one.name, one]));
  return [
    ...changedKeys(reference.requirements, now, () => true).map(
      ({ key, how }) => `the requirement ${key}${how}`,
    ),
    ...requirements.flatMap((one) => {
      const changes = requirementChanges(reference, one);
      return changes.length === 0 ? [] : [`${one.name} (${changes.join(', ')})`];
    }),
  ];
}

function parameterChanges(reference: Reference, { parameters }: Spec): string[] {
  const now = Object.fromEntries(parameters.map((one) => [one.name, one]));
  return changedKeys(reference.parameters, now, () => true)
    .map(({ key, how }) => `the parameter ${key}${how}`)
    .concat(
      parameters.flatMap(({ name, nominal, low, high }) => {
        const then = Object.hasOwn(reference.parameters, name) ? reference.parameters[name] : undefined;
        if (!then) return [];
        const changes: string[] = [];
        if (then.low !== low || then.high !== high) changes.push(`the bounds of ${name}`);
        if (then.nominal !== nominal) changes.push(`the nominal value of ${name}`);
        return changes;
      }),
    );
}

function changedKeys<A, B>(
  then: Readonly<Record<string, A>>,
  now: Readonly<Record<string, B>>,
  same: (a: A, b: B) => boolean,
): { key: string; how: string }[] {
  const added = Object.keys(now).filter((key) => !Object.hasOwn(then, key));
  const removed = Object.keys(then).filter((key) => !Object.hasOwn(now, key));
  const other = Object.keys(now).filter((key) => Object.hasOwn(then, key) && !same(then[key], now[key]));
  return [
    ...added.map((key) => ({ key, how: ', which is new' })),
    ...removed.map((key) => ({ key, how: ', which is gone' })),
    ...other.map((key) => ({ key, how: '' })),
  ];
}

function sameLimit(a: Limit, b: Limit): boolean {
  return JSON.stringify(a) === JSON.stringify(b);
}

/** Where a thing stands in the file, and how it is spaced there, is no part of it. */
function digestOf(value: unknown): string {
  const text = JSON.stringify(value, (key, inner) =>
    key === 'place' || key.endsWith('Place') || key === 'asWritten' ? undefined : inner,
  );
  return createHash('sha256').update(text).digest('hex').slice(0, 16);
}
