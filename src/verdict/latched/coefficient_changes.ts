import type { CoefficientValues, StoredNumbers } from '../../loop/parts.js';
import type { LatchedNumbers } from '../../measure/measure.js';
import type { Spec } from '../../spec/spec.js';
import type { CoefficientChange } from '../run.js';
import type { Reference } from './reference.js';
import { latchedValues } from './reference.js';

/** Coefficients that differ from the latched ones, in the order of today's spec; those that are gone come last. */
export function coefficientChanges(
  reference: Reference,
  today: CoefficientValues,
  units: ReadonlyMap<string, string | undefined>,
): CoefficientChange[] {
  const latched = latchedValues(reference);
  const changes = [...today].flatMap(([name, now]) =>
    changeOf(name, latched.get(name), now, reference, units),
  );
  const gone = [...latched]
    .filter(([name]) => !today.has(name))
    .map(([name, then]) => ({
      name,
      latched: numbersOf(then),
      today: undefined,
      elements: [],
      unlike: 'the spec no longer names it',
    }));
  return [...changes, ...gone];
}

/** What today's coefficients are compared with, by name: latched numbers in the same unit, or why there are none. */
export function latchedNumbers(
  reference: Reference,
  today: CoefficientValues,
  units: ReadonlyMap<string, string | undefined>,
): LatchedNumbers {
  const unlike = new Map(coefficientChanges(reference, today, units).map((one) => [one.name, one.unlike]));
  const latched = latchedValues(reference);
  return new Map(
    [...today.keys()].map((name) => {
      const why = unlike.get(name);
      return [
        name,
        why === undefined
          ? numbersOf(latched.get(name)!)
          : `the latched reference has no numbers to compare '${name}' with: ${why}; accept it with pawl latch`,
      ];
    }),
  );
}

/** Today's coefficients as what they are compared with once they are latched. */
export function asLatched(today: CoefficientValues): LatchedNumbers {
  return new Map([...today].map(([name, now]) => [name, numbersOf(now)]));
}

/** Units of a spec's coefficients by name, as they are written. */
export function coefficientUnits({ firmware }: Spec): Map<string, string | undefined> {
  return new Map(firmware?.coefficients.map(({ name, unit }) => [name, unit?.text]));
}

/**
 * Today's numbers with the latched ones in their place, for the coefficients of these changes; undefined where today's spec would
 * run with the same numbers.
 */
export function withLatched(
  today: CoefficientValues,
  reference: Reference,
  changes: readonly CoefficientChange[],
): CoefficientValues | undefined {
  if (!changes.some((change) => isLike(change) && change.today !== undefined)) return undefined;
  const latched = latchedValues(reference);
  const replaced = new Set(changes.filter(isLike).map(({ name }) => name));
  return new Map([...today].map(([name, now]) => [name, replaced.has(name) ? latched.get(name)! : now]));
}

/** Whether today's spec can be run with the latched numbers of the coefficient. */
export function isLike({ unlike }: CoefficientChange): boolean {
  return unlike === undefined;
}

function changeOf(
  name: string,
  then: readonly number[] | StoredNumbers | undefined,
  now: readonly number[] | StoredNumbers,
  reference: Reference,
  units: ReadonlyMap<string, string | undefined>,
): CoefficientChange[] {
  const [old, young] = [then && numbersOf(then), numbersOf(now)];
  const change = { name, latched: old, today: young };
  if (!old) return [{ ...change, elements: [], unlike: 'it is new' }];
  const unit = reference.coefficients[name].unit ?? undefined;
  if (unit !== units.get(name)) {
    const shown = (text: string | undefined): string => text ?? 'none';
    return [
      { ...change, elements: [], unlike: `its unit was ${shown(unit)} and is ${shown(units.get(name))}` },
    ];
  }
  if (old.length !== young.length) {
    return [{ ...change, elements: [], unlike: `it had ${old.length} numbers and has ${young.length}` }];
  }
  const elements = young.flatMap((value, at) => (Object.is(value, old[at]) ? [] : [at]));
  const sameFormat = formatOf(then!) === formatOf(now);
  return elements.length === 0 && sameFormat ? [] : [{ ...change, elements }];
}

function numbersOf(of: readonly number[] | StoredNumbers): readonly number[] {
  return 'format' in of ? of.values : of;
}

function formatOf(of: readonly number[] | StoredNumbers): string | undefined {
  return 'format' in of ? of.format : undefined;
}
