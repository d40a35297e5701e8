import { functions, isReserved } from './functions.js';
import type { Problems } from './problems.js';
import type { NameRole, Place, Unit } from './spec.js';

/** What a name stands for, in the words of errors. */
export type NameKind =
  | 'plant signal'
  | 'controller signal'
  | 'sensor'
  | 'actuator'
  | 'input'
  | 'parameter'
  | 'coefficient'
  | 'constant';

/** A defined name. */
export interface NameEntry {
  name: string;
  kind: NameKind;
  place: Place;
  /**
   * The declared unit; plain where none is given. `undefined`: not known because its definition is wrong (already
   * reported), or a coefficient that takes the unit of its slot (`adapts`).
   */
  unit: Unit | undefined;
  adapts: boolean;
  /** SI value of a constant, nominal SI value of a parameter. */
  value: number | undefined;
  /** Defined more than once: what it stands for is not known. */
  twice: boolean;
  /** The controller of a controller signal. */
  controller: string | undefined;
}

/** The flat namespace of a spec, and which of its names something uses. */
export interface Names {
  entries: Map<string, NameEntry>;
  used: Set<string>;
  /** Something that may use a name could not be read, so that no name can be called unused. */
  incomplete: boolean;
}

/** "a sensor", "an input". */
export function aKind(kind: NameKind): string {
  return /^[aeiou]/.test(kind) ? `an ${kind}` : `a ${kind}`;
}

/** "a sensor, controller signal or actuator": of several kinds. */
export function oneOfKinds(kinds: readonly NameKind[]): string {
  return `${aKind(kinds[0])}${kinds
    .slice(1, -1)
    .map((kind) => `, ${kind}`)
    .join('')} or ${kinds.at(-1)}`;
}

/** The role in a checked expression; constants have become numbers by then. */
export const roleOf: Readonly<Record<Exclude<NameKind, 'constant'>, NameRole>> = {
  'plant signal': 'signal',
  'controller signal': 'signal',
  sensor: 'sensor',
  actuator: 'actuator',
  input: 'input',
  parameter: 'parameter',
  coefficient: 'coefficient',
};

/** Takes a name into the namespace, or reports why it cannot be. */
export function declare(names: Names, entry: NameEntry, problems: Problems): void {
  const fault = nameFault(entry.name);
  if (fault !== undefined) problems.add(entry.place, fault);
  const earlier = names.entries.get(entry.name);
  if (earlier === undefined) {
    names.entries.set(entry.name, entry);
    return;
  }
  earlier.twice = true;
  const sameFile = earlier.place.file === entry.place.file;
  const where = sameFile ? `line ${earlier.place.line}` : `${earlier.place.file}:${earlier.place.line}`;
  problems.add(
    entry.place,
    `the name \`${entry.name}\` is already taken by the ${earlier.kind} at ${where}; every name is defined once`,
  );
}

/** Why a text cannot be a name, or undefined. */
export function nameFault(name: string): string | undefined {
  if (!/^[A-Za-z][A-Za-z0-9_]*$/.test(name)) {
    return `\`${name}\` cannot be a name; a name is a letter followed by letters, digits and _`;
  }
  if (!isReserved(name)) return undefined;
  const kind = functions.some((known) => known.name === name) ? 'the name of a function' : 'a reserved word';
  return `\`${name}\` is ${kind} and cannot be given to anything else`;
}

/** Where an expression stands: which names it may see, and in which units it computes. */
export interface Room {
  sees: readonly NameKind[];
  /** For errors: "a plant expression". */
  words: string;
  /** Whether values are in SI, or in the declared units of the names. */
  si: boolean;
  mayLookBack: boolean;
}

/** Plant equations, and what sensors take. */
export const plantRoom: Room = {
  sees: ['plant signal', 'input', 'actuator', 'parameter', 'constant'],
  words: 'a plant expression',
  si: true,
  mayLookBack: false,
};

/** What the firmware computes. */
export const controllerRoom: Room = {
  sees: ['sensor', 'input', 'coefficient', 'constant', 'controller signal'],
  words: 'a controller expression',
  si: false,
  mayLookBack: true,
};

/** `every`, `phase` and `delay` of a controller. */
export const timingRoom: Room = {
  sees: ['coefficient', 'parameter', 'constant'],
  words: 'the timing of a controller',
  si: false,
  mayLookBack: false,
};

/** Settings of sensors and actuators. */
export const settingRoom: Room = {
  sees: ['parameter', 'constant'],
  words: 'a setting of a sensor or actuator',
  si: true,
  mayLookBack: false,
};

/** Amounts and times of scenarios. */
export const scenarioRoom: Room = {
  sees: ['parameter', 'constant'],
  words: 'an amount or time of a scenario',
  si: true,
  mayLookBack: false,
};

/** Parameters that follow from others, and conditions on parameters. */
export const derivedRoom: Room = {
  sees: ['parameter', 'constant'],
  words: 'an expression of parameters',
  si: true,
  mayLookBack: false,
};
