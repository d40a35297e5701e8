import { biquads } from './biquads.js';
import type { Block } from './block.js';
import { integral } from './integral.js';
import { lag } from './lag.js';
import { pid } from './pid.js';
import { value } from './value.js';

/** Every block that a spec can use. */
export const blocks: readonly Block[] = [value, integral, lag, pid, biquads];
