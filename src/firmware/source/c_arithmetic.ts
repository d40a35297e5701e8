import { FirmwareError } from '../failure.js';
import { type ArithmeticType, type DataModel, integer, nameOf } from './c_type.js';

/** A constant with its type: integers as bigint, floats as number, already rounded to the type. */
export interface CValue {
  type: ArithmeticType;
  value: number | bigint;
}

/** Converts as an assignment or a cast does (C11, 6.3.1). @throws FirmwareError where C leaves the result open */
export function converted(given: CValue, type: ArithmeticType): CValue {
  const { value } = given;
  if (type.kind === 'float') {
    const wide = Number(value);
    return { type, value: type.bits === 32 ? Math.fround(wide) : wide };
  }
  if (type.name === 'bool' || type.name === '_Bool')
    return { type, value: value === 0 || value === 0n ? 0n : 1n };
  if (typeof value === 'bigint') return { type, value: wrapped(value, type) };
  if (!Number.isFinite(value))
    throw new FirmwareError('unsupported', `${value} cannot be converted to ${type.name}`);
  const whole = BigInt(Math.trunc(value));
  if (wrapped(whole, type) !== whole)
    throw new FirmwareError('unsupported', `${value} does not fit ${type.name}`);
  return { type, value: whole };
}

function wrapped(value: bigint, type: ArithmeticType & { kind: 'integer' }): bigint {
  return type.signed ? BigInt.asIntN(type.bits, value) : BigInt.asUintN(type.bits, value);
}

/** An operator with one operand. */
export function unary(operator: string, operand: CValue, model: DataModel): CValue {
  if (operator === '!') return truth(operand.value === 0 || operand.value === 0n, model);
  const promotedOperand = promoted(operand, model);
  const { type, value } = promotedOperand;
  if (operator === '+') return promotedOperand;
  if (operator === '-') return typeof value === 'number' ? { type, value: -value } : checked(-value, type);
  if (operator === '~' && typeof value === 'bigint') return converted({ type, value: ~value }, type);
  throw new FirmwareError(
    'unsupported',
    `the operator ${operator} on ${type.name} is no constant arithmetic`,
  );
}

/** An operator with two operands, after the usual arithmetic conversions (C11, 6.3.1.8). */
export function binary(operator: string, left: CValue, right: CValue, model: DataModel): CValue {
  if (operator === '<<' || operator === '>>')
    return shifted(operator, promoted(left, model), promoted(right, model));
  const type = commonType(promoted(left, model).type, promoted(right, model).type, model);
  const [a, b] = [converted(left, type).value, converted(right, type).value];
  const compared = comparison(operator, a, b);
  if (compared !== undefined) return truth(compared, model);
  if (typeof a === 'number' && typeof b === 'number')
    return { type, value: rounded(floatResult(operator, a, b, type), type) };
  return checked(integerResult(operator, a as bigint, b as bigint), type);
}

function comparison(operator: string, a: number | bigint, b: number | bigint): boolean | undefined {
  switch (operator) {
    case '<':
      return a < b;
    case '>':
      return a > b;
    case '<=':
      return a <= b;
    case '>=':
      return a >= b;
    case '==':
      return a === b;
    case '!=':
      return a !== b;
    default:
      return undefined;
  }
}

function floatResult(operator: string, a: number, b: number, type: ArithmeticType): number {
  switch (operator) {
    case '+':
      return a + b;
    case '-':
      return a - b;
    case '*':
      return a * b;
    case '/':
      return a / b;
    default:
      throw new FirmwareError(
        'unsupported',
        `the operator ${operator} on ${type.name} is no constant arithmetic`,
      );
  }
}

/** Every operation of two float32 is exact enough in float64 to round once more without harm (Figueroa, 1995). */
function rounded(value: number, type: ArithmeticType): number {
  return type.bits === 32 ? Math.fround(value) : value;
}

function integerResult(operator: string, a: bigint, b: bigint): bigint {
  switch (operator) {
    case '+':
      return a + b;
    case '-':
      return a - b;
    case '*':
      return a * b;
    case '/':
    case '%':
      if (b === 0n) throw new FirmwareError('unsupported', `${a} ${operator} 0 is a division by zero`);
      return operator === '/' ? a / b : a % b;
    case '&':
      return a & b;
    case '|':
      return a | b;
    case '^':
      return a ^ b;
    default:
      throw new FirmwareError('unsupported', `the operator ${operator} is no constant arithmetic`);
  }
}

function shifted(operator: string, left: CValue, right: CValue): CValue {
  const { type, value } = left;
  if (
    typeof value !== 'bigint' ||
    typeof right.value !== 'bigint' ||
    right.value < 0n ||
    right.value >= BigInt(type.bits)
  ) {
    throw new FirmwareError(
      'unsupported',
      `${value} ${operator} ${right.value} is not defined for ${type.name}`,
    );
  }
  return operator === '>>' ? { type, value: value >> right.value } : checked(value << right.value, type);
}

/** Unsigned integers wrap; a signed one that overflows has no value in C. */
function checked(value: bigint, type: ArithmeticType): CValue {
  const result = converted({ type, value }, type);
  if (type.kind === 'integer' && type.signed && result.value !== value) {
    throw new FirmwareError('unsupported', `${value} overflows ${type.name}, which C leaves undefined`);
  }
  return result;
}

function promoted(operand: CValue, model: DataModel): CValue {
  const { type } = operand;
  if (type.kind === 'float' || type.bits > model.int) return operand;
  const keepsSign = type.signed || type.bits < model.int;
  return converted(operand, integer(nameOf(model.int, keepsSign, model), model.int, keepsSign));
}

function commonType(a: ArithmeticType, b: ArithmeticType, model: DataModel): ArithmeticType {
  if (a.kind === 'float' || b.kind === 'float') {
    if (a.kind !== 'float') return b;
    return b.kind === 'float' && b.bits > a.bits ? b : a;
  }
  const bits = Math.max(a.bits, b.bits) as 8 | 16 | 32 | 64;
  const signed = (a.bits < bits || a.signed) && (b.bits < bits || b.signed);
  return integer(nameOf(bits, signed, model), bits, signed);
}

function truth(isTrue: boolean, model: DataModel): CValue {
  return { type: integer('int', model.int, true), value: isTrue ? 1n : 0n };
}
