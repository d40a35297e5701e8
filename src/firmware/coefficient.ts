/** How the stored bits of one element make a number. */
export type NumberFormat =
  | { kind: 'float'; bits: 16 | 32 | 64 }
  | { kind: 'integer'; bits: 8 | 16 | 32 | 64; signed: boolean }
  | { kind: 'fixed'; bits: 8 | 16 | 32 | 64; signed: boolean; fractionalBits: number };

/** One stored number: a scalar, or one element of an array. */
export interface StoredElement {
  /** The number which the stored bits mean, exact (64-bit integers beyond 2^53 are refused). */
  value: number;
  /** The stored bits, most significant digit first, `0x…`, as wide as the type. */
  stored: string;
  /** Address on the target in bytes, or undefined for a value that has no address. */
  address: number | undefined;
  /** Name of the value, where the type is an enumeration which has one for it. */
  enumerator?: string;
  /** Distance to the next number which can be stored, in the unit of the value; absent for what is not finite. */
  quantum?: number;
  /** What is conspicuous about the stored bits. */
  remark?: StoredRemark;
}

/** A stored number that is hardly meant: `erased` is flash which nobody wrote, all ones. */
export type StoredRemark = 'not_a_number' | 'infinite' | 'denormal' | 'erased';

/** value = stored number × scale + offset, one entry for each element. */
export interface Scaling {
  scale: number[];
  offset: number[];
}

/** Where the variable is declared in the source, as the debug information says. */
export interface DeclaredAt {
  file: string;
  line: number;
}

/** A number, or an array of numbers, read from a firmware build. */
export interface Coefficient {
  /** What the spec asked for, e.g. `azimuth.gains.kp`. */
  path: string;
  /** Flattened in storage order, last index fastest; one element for a scalar. */
  elements: StoredElement[];
  /** Lengths of the dimensions, outermost first; empty for a scalar. */
  shape: number[];
  /** The type in words a C programmer knows, e.g. `float`, `int16_t[5]`, with the format where one was given: `int16_t[5] as Q2.14`. */
  type: string;
  format: NumberFormat;
  declaredAt: DeclaredAt | undefined;
  /** Present where the spec gave a scale or an offset; the values have it applied. */
  scaling?: Scaling;
}
