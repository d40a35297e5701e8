import { z } from 'zod';
import type { CoefficientValues } from '../../loop/parts.js';

/** The format of the file; another one is refused. */
export const referenceFormat = 1;

const words = { infinite: Number.POSITIVE_INFINITY, 'minus infinite': Number.NEGATIVE_INFINITY } as const;
const number = z
  .union([z.number(), z.enum(['infinite', 'minus infinite'])])
  .transform((value) => (typeof value === 'number' ? value : words[value]));

const coefficient = z.strictObject({
  at: z.string(),
  type: z.string(),
  unit: z.string().nullable(),
  format: z.string().nullable(),
  fractional_bits: z.number().int().nullable(),
  shape: z.array(z.number().int().positive()),
  values: z.array(number).min(1),
  stored: z.array(z.string()).min(1),
});

const result = z.strictObject({
  value: number.nullable(),
  why: z.string().optional(),
  headroom: number.nullable(),
});

const requirement = z.strictObject({
  measure: z.string(),
  asked: z.string(),
  limit: z.union([
    z.strictObject({ at_most: number }),
    z.strictObject({ at_least: number }),
    z.strictObject({ between: z.tuple([number, number]) }),
  ]),
  unit: z.string(),
  holds_for: z.union([z.enum(['nominal', 'all']), z.number()]),
  verdict: z.enum(['met', 'broken', 'unjudged']),
  nominal: result,
  worst: result,
  plant: z.record(z.string(), number),
  waiver: z.strictObject({ reason: z.string(), until: z.string() }).optional(),
});

const schema = z.strictObject({
  format: z.literal(referenceFormat),
  pawl: z.string(),
  loop: z.string(),
  reason: z.string(),
  image: z.strictObject({ sha256: z.string(), compilers: z.array(z.string()) }).nullable(),
  plants: z.record(z.string(), z.number().int()),
  seed: z.number().int(),
  coefficients: z.record(z.string(), coefficient),
  parameters: z.record(
    z.string(),
    z.strictObject({ nominal: number, low: number, high: number, unit: z.string() }),
  ),
  parts: z.record(z.string(), z.string()),
  law: z.record(z.string(), z.strictObject({ size: z.number().int(), digest: z.string() })),
  requirements: z.record(z.string(), requirement),
});

/**
 * What the team last accepted: coefficients with their stored bits, limits, results and worst plants (SI), what the spec said,
 * and digests of the control law. `parts` are digests of the spec's named parts, `asked` one of a requirement without its limit.
 */
export type Reference = z.infer<typeof schema>;

/** One requirement of a reference. */
export type LatchedRequirement = Reference['requirements'][string];

/** One measure's result in a reference: no value where there was none, and then `why`. */
export type LatchedResult = Reference['requirements'][string]['worst'];

/** A latched reference, or what is wrong with its text in one line for people. */
export type ReadReference = { kind: 'reference'; reference: Reference } | { kind: 'fault'; message: string };

/** Reads the text of a latched reference. */
export function readReference(text: string): ReadReference {
  let parsed: unknown;
  try {
    parsed = JSON.parse(text);
  } catch (error) {
    return { kind: 'fault', message: `it is not JSON: ${(error as Error).message}` };
  }
  const format = (parsed as { format?: unknown } | null)?.format;
  if (typeof format === 'number' && format !== referenceFormat) {
    return {
      kind: 'fault',
      message: `it has format ${format}, and this version of pawl reads format ${referenceFormat}`,
    };
  }
  const checked = schema.safeParse(parsed);
  if (checked.success) return { kind: 'reference', reference: checked.data };
  const [{ path, message }] = checked.error.issues;
  return { kind: 'fault', message: `at ${path.join('.') || 'its top'}: ${message}` };
}

/** The latched numbers as a loop takes them. */
export function latchedValues({ coefficients }: Reference): CoefficientValues {
  return new Map(
    Object.entries(coefficients).map(([name, { values, format, fractional_bits: bits }]) => [
      name,
      format === null ? values : { values, format, fractionalBits: bits ?? undefined },
    ]),
  );
}
