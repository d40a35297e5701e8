import type { ParameterDefinition } from '../spec/spec.js';
import type { ParameterValue } from './run.js';

/** A plant's values beside their nominal ones, each with how far it is on its way to the bound on its side. */
export function parameterValues(
  parameters: readonly ParameterDefinition[],
  values: ArrayLike<number>,
): ParameterValue[] {
  return parameters.map(({ name, unit, nominal, low, high, derived }, i) => {
    // One that follows from others is not moved by itself.
    const move = derived ? 0 : values[i] - nominal;
    const room = move < 0 ? nominal - low : high - nominal;
    const moved = move === 0 ? 0 : move / room;
    return { name, unit, nominal, value: values[i], moved, ...(derived && { derived: true as const }) };
  });
}
