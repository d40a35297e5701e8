/** Key of the object that stands for a number which JSON cannot hold. */
const numberKey = 'pawl number';
const unusual = ['NaN', 'Infinity', '-Infinity', '-0'];

/** JSON which gives every number back as it was: those that JSON cannot hold stand as objects. */
export function exactJson(value: unknown): string {
  return JSON.stringify(value, (_, one) =>
    typeof one === 'number' && (!Number.isFinite(one) || Object.is(one, -0))
      ? { [numberKey]: Object.is(one, -0) ? '-0' : String(one) }
      : one,
  );
}

/** Reads what `exactJson` wrote. @throws {SyntaxError} where it is no JSON. */
export function fromExactJson(text: string): unknown {
  return JSON.parse(text, (_, one) => (unusual.includes(one?.[numberKey]) ? Number(one[numberKey]) : one));
}
