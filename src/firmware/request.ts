/** What a spec asks for. */
export interface CoefficientRequest {
  /** Name in the spec, under which errors are reported. */
  name: string;
  /** Path into the image, e.g. `azimuth.gains.kp`, `notch[3]`, `file.c:limit`, `ns::type::member`, `active->kp`. */
  at: string;
  /** Number format, e.g. `Q2.14`, `UQ8.8`, `float32`, `int16`; needed where nothing states a type. */
  format?: string;
  /** The value is stored × scale + offset; a list has one entry for each element, or for each row of a table. */
  scale?: number | readonly number[];
  offset?: number | readonly number[];
  /** The spec knows that cleared memory keeps its zero: `.bss` may be read. */
  startsAtZero?: boolean;
  /** Address on the target in bytes, for images without names; `at` is then a label only. */
  address?: number;
  /** Number of elements at `address`; without it a scalar. */
  count?: number;
}
