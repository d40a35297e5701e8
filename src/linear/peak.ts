/** The largest size of a response over frequency. */
export interface Peak {
  /** As a ratio; Infinity for an unstable system. */
  value: number;
  /** rad/s; 0, half the sampling frequency or Infinity when the peak lies at the end. Undefined for an unstable system. */
  frequency: number | undefined;
}
