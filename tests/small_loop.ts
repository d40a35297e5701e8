import { vocabulary } from '../src/cli/vocabulary.js';
import { PlantEvaluator } from '../src/measure/evaluate_plant.js';
import type { MeasureResult } from '../src/measure/measure.js';
import { formatSpecError, loadSpec, type Spec } from '../src/spec/index.js';

/** Sections of a small spec as YAML text without their indentation; those not given are left out. */
export interface SmallLoop {
  constants?: string;
  parameters?: string;
  inputs?: string;
  plant?: string;
  sensors?: string;
  controllers?: string;
  actuators?: string;
  /** Coefficients by name, as the spec's `coefficients:` section; their values are given apart. */
  coefficients?: string;
  scenarios?: string;
  /** Requirements, one line of a flow mapping each. */
  requirements: string[];
  seed?: number;
}

/** The text of a small spec. */
export function smallSpec(loop: SmallLoop): string {
  const sections = [
    'parameters',
    'constants',
    'inputs',
    'plant',
    'sensors',
    'controllers',
    'actuators',
    'scenarios',
  ] as const;
  const lines = ['pawl: 1', 'loop: small'];
  if (loop.coefficients) {
    lines.push('firmware:', '  image: none.elf', '  coefficients:', indented(loop.coefficients, 4));
  }
  for (const section of sections) {
    const text = loop[section];
    if (text !== undefined) lines.push(`${section}:`, indented(text, 2));
  }
  lines.push('requirements:', ...loop.requirements.map((requirement) => `  - ${requirement}`));
  if (loop.seed !== undefined) lines.push('perturbation:', `  seed: ${loop.seed}`, '  plants: 1');
  return lines.join('\n');
}

/**
 * The spec of a small loop.
 * @throws with all errors of the text.
 */
export function smallSpecOf(loop: SmallLoop): Spec {
  const loaded = loadSpec(smallSpec(loop), 'small.pawl.yaml', vocabulary);
  if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
  return loaded.spec;
}

/** Measures every requirement of a small loop on its nominal plant. */
export function measureSmall(
  loop: SmallLoop,
  { halvings = 0, coefficients = {} }: { halvings?: number; coefficients?: Record<string, number[]> } = {},
): MeasureResult[] {
  const spec = smallSpecOf(loop);
  const evaluator = new PlantEvaluator(spec, new Map(Object.entries(coefficients)));
  const nominal = Float64Array.from(spec.parameters, (parameter) => parameter.nominal);
  return evaluator.evaluate(nominal, halvings);
}

/** The value of a result. @throws where it is none, with the reason. */
export function numberOf(result: MeasureResult): number {
  if (result.kind === 'value') return result.value;
  throw new Error(`no value, but ${result.kind}: ${result.why}`);
}

/** The values of all requirements of a small loop, which must all have one. */
export function smallValues(loop: SmallLoop, halvings = 0): number[] {
  return measureSmall(loop, { halvings }).map(numberOf);
}

function indented(text: string, by: number): string {
  return text
    .split('\n')
    .map((line) => ' '.repeat(by) + line)
    .join('\n');
}
