import { LoopError } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import { scaled } from '../spec/decimal.js';
import type { Requirement, Spec } from '../spec/spec.js';
import { measureNamed } from './index.js';
import {
  type FirmwareContext,
  isFirmwareMeasure,
  type LatchedNumbers,
  type MeasureResult,
} from './measure.js';

/** The results of the requirements about the build's numbers alone, by their place in the spec: the same for every plant. */
export function firmwareResults(
  spec: Spec,
  coefficients: CoefficientValues,
  latched: LatchedNumbers = new Map(),
): Map<number, MeasureResult> {
  const results = new Map<number, MeasureResult>();
  spec.requirements.forEach((requirement, index) => {
    const measure = measureNamed(requirement.measure);
    if (!isFirmwareMeasure(measure)) return;
    results.set(index, measure.measure(numbersOf(requirement, spec, coefficients, latched)));
  });
  return results;
}

/** @throws {LoopError} where the coefficient was not read. */
function numbersOf(
  { signals, place }: Requirement,
  { firmware }: Spec,
  coefficients: CoefficientValues,
  latched: LatchedNumbers,
): FirmwareContext {
  const name = signals.of;
  const found = coefficients.get(name);
  if (!found) throw new LoopError(`coefficient '${name}' was not read from the build`, place);
  const stored = 'format' in found ? found : undefined;
  const values = stored ? stored.values : (found as readonly number[]);
  const unit = firmware?.coefficients.find((one) => one.name === name)?.unit;
  return {
    ...{ name, values, stored },
    si: (value) => scaled(value, unit?.scale ?? 1),
    latched: latched.get(name) ?? 'there is no latched reference to compare with',
  };
}
