import { Cursor } from '../cursor.js';
import { attribute, indexedAddress } from './attributes.js';
import { at, form, operation as op } from './codes.js';
import type { Unit } from './debug_information.js';
import type { Entry } from './entry.js';

/** Where the bytes of a variable are. */
export type Place =
  | { kind: 'memory'; address: number }
  /** A constant without an address, in the byte order of the target. */
  | { kind: 'bytes'; bytes: Uint8Array }
  /** A constant number without an address; as many of its low bits count as the type is wide. */
  | { kind: 'number'; value: bigint }
  /** Parts one behind the other: the optimiser took the variable to pieces. */
  | { kind: 'pieces'; pieces: { place: Place; size: number }[] }
  | { kind: 'none'; why: string };

const mostPieces = 4096;

/** The place which a variable's entry states by its location or constant value. */
export function placeOf(entry: Entry, constant: Entry | undefined): Place {
  const location = attribute(entry, at.location);
  if (location) {
    if (location.value instanceof Uint8Array) return evaluate(entry.unit, location.value);
    return { kind: 'none', why: 'it changes its place while the program runs (a location list)' };
  }
  const value = constant && attribute(constant, at.constValue);
  if (!value) return { kind: 'none', why: 'the compiler removed it: nothing that was built needs it' };
  if (value.value instanceof Uint8Array) return { kind: 'bytes', bytes: value.value };
  if (typeof value.value === 'string') return { kind: 'bytes', bytes: Buffer.from(`${value.value}\0`) };
  if (value.form === form.strp || value.form === form.strx)
    return { kind: 'none', why: 'its value is a text' };
  return { kind: 'number', value: BigInt(value.value) };
}

/** Evaluates a location expression as far as data with a fixed place needs (DWARF 5, section 2.5). */
export function evaluate(unit: Unit, expression: Uint8Array): Place {
  const cursor = new Cursor(
    expression,
    unit.debug.elf.littleEndian,
    `a location expression of ${unit.debug.elf.name}`,
  );
  const pieces: { place: Place; size: number }[] = [];
  let part = new Evaluation(unit, cursor);
  while (!cursor.atEnd) {
    const code = cursor.u8();
    if (code === op.piece) {
      pieces.push({ place: part.result(), size: cursor.uleb() });
      if (pieces.length > mostPieces) throw cursor.failure(`more than ${mostPieces} pieces`);
      part = new Evaluation(unit, cursor);
    } else part.step(code);
    const stopped = part.stopped;
    if (stopped) return stopped;
  }
  return pieces.length > 0 ? { kind: 'pieces', pieces } : part.result();
}

class Evaluation {
  private readonly stack: bigint[] = [];
  private place: Place | undefined;
  stopped: Place | undefined;

  constructor(
    private readonly unit: Unit,
    private readonly cursor: Cursor,
  ) {}

  /** The place of the part that ends here; a part without any operation was optimised away. */
  result(): Place {
    if (this.place) return this.place;
    const top = this.stack.at(-1);
    if (top === undefined) return { kind: 'none', why: 'the optimiser removed it' };
    return { kind: 'memory', address: Number(BigInt.asUintN(8 * this.unit.addressSize, top)) };
  }

  step(code: number): void {
    const { cursor, stack } = this;
    const operand = this.operand(code);
    if (operand !== undefined) {
      stack.push(operand);
      return;
    }
    switch (code) {
      case op.nop:
        return;
      case op.dup: {
        const top = this.pop();
        stack.push(top, top);
        return;
      }
      case op.plus:
        stack.push(this.pop() + this.pop());
        return;
      case op.minus: {
        const taken = this.pop();
        stack.push(this.pop() - taken);
        return;
      }
      case op.plusUconst:
        stack.push(this.pop() + cursor.uleb64());
        return;
      case op.implicitValue:
        this.place = { kind: 'bytes', bytes: cursor.slice(cursor.uleb()) };
        return;
      case op.stackValue:
        this.place = { kind: 'number', value: this.pop() };
        return;
      case op.formTlsAddress:
      case op.gnuPushTlsAddress:
        this.stopped = { kind: 'none', why: 'it is thread-local: every thread has its own' };
        return;
      default:
        this.stopped = {
          kind: 'none',
          why: `its place is computed while the program runs (operation 0x${code.toString(16)})`,
        };
    }
  }

  /** The number that an operation pushes by itself. */
  private operand(code: number): bigint | undefined {
    const { cursor, unit } = this;
    if (code >= op.lit0 && code <= op.lit31) return BigInt(code - op.lit0);
    switch (code) {
      case op.addr:
        return unit.addressSize === 8 ? cursor.u64() : BigInt(cursor.unsigned(unit.addressSize));
      case op.addrx:
      case op.constx:
      case op.gnuAddrIndex:
      case op.gnuConstIndex:
        return BigInt(indexedAddress(unit, cursor.uleb()));
      case op.const1u:
        return BigInt(cursor.u8());
      case op.const1s:
        return BigInt.asIntN(8, BigInt(cursor.u8()));
      case op.const2u:
        return BigInt(cursor.u16());
      case op.const2s:
        return BigInt.asIntN(16, BigInt(cursor.u16()));
      case op.const4u:
        return BigInt(cursor.u32());
      case op.const4s:
        return BigInt.asIntN(32, BigInt(cursor.u32()));
      case op.const8u:
        return cursor.u64();
      case op.const8s:
        return BigInt.asIntN(64, cursor.u64());
      case op.constu:
        return cursor.uleb64();
      case op.consts:
        return cursor.sleb64();
      default:
        return undefined;
    }
  }

  private pop(): bigint {
    const top = this.stack.pop();
    if (top === undefined) throw this.cursor.failure('an operation on an empty stack');
    return top;
  }
}
