import type { Complex } from './complex.js';
import { NumericFailure } from './numeric_failure.js';
import type { StateEquations } from './state_equations.js';
import { prepareTransfer } from './transfer.js';

/**
 * The response of a system with one input and one output at `angularFrequency` (rad/s): d + c·(p·I − a)⁻¹·b with p = jω,
 * or e^{jωT} for a sampled system. For more than a few frequencies use `prepareResponse`.
 * @throws RangeError for several inputs or outputs, NumericFailure at a pole, where the response is infinite.
 */
export function responseAt(system: StateEquations, angularFrequency: number): Complex {
  return prepareResponse(system)(angularFrequency);
}

/**
 * As `responseAt`, with all the work done once that does not depend on frequency.
 * @throws RangeError for several inputs or outputs; the returned function throws NumericFailure at a pole.
 */
export function prepareResponse(system: StateEquations): (angularFrequency: number) => Complex {
  expectSingle(system);
  const transfer = prepareTransfer(system);
  const parts = new Float64Array(4);
  return (angularFrequency) => {
    transfer.evaluate(angularFrequency, parts);
    return quotient(parts, 2, angularFrequency);
  };
}

/**
 * The response of a system with several inputs and outputs, prepared once: the returned function gives, for an angular
 * frequency in rad/s, one row for each output with one entry for each input.
 * @throws the returned function throws NumericFailure at a pole.
 */
export function prepareResponseMatrix(system: StateEquations): (angularFrequency: number) => Complex[][] {
  const outputs = system.c.rows;
  const transfers = Array.from({ length: system.b.columns }, (_, input) => prepareTransfer(system, input));
  const parts = new Float64Array(2 + 2 * outputs);
  return (angularFrequency) => {
    const rows: Complex[][] = Array.from({ length: outputs }, () => []);
    for (const transfer of transfers) {
      transfer.evaluate(angularFrequency, parts);
      rows.forEach((row, k) => {
        row.push(quotient(parts, 2 + 2 * k, angularFrequency));
      });
    }
    return rows;
  };
}

/**
 * Checks that a system has one input and one output.
 * @throws RangeError when it has not.
 */
export function expectSingle(system: StateEquations): void {
  const inputs = system.b.columns;
  const outputs = system.c.rows;
  if (inputs !== 1 || outputs !== 1) {
    throw new RangeError(`one input and one output were expected, the system has ${inputs} and ${outputs}`);
  }
}

function quotient(parts: Float64Array, at: number, frequency: number): Complex {
  const [real, imaginary] = parts;
  const size = real * real + imaginary * imaginary;
  if (size === 0) throw new NumericFailure(`the response at ${frequency} rad/s is infinite: there is a pole`);
  return {
    real: (parts[at] * real + parts[at + 1] * imaginary) / size,
    imaginary: (parts[at + 1] * real - parts[at] * imaginary) / size,
  };
}
