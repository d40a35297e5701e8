import { chirp } from './chirp.js';
import { noise } from './noise.js';
import { pulse } from './pulse.js';
import { ramp } from './ramp.js';
import { recorded } from './recorded.js';
import type { Shape } from './shape.js';
import { sine } from './sine.js';
import { square } from './square.js';
import { staircase } from './staircase.js';
import { step } from './step.js';

/** Everything that an input can do in a scenario. */
export const shapes: readonly Shape[] = [step, pulse, ramp, sine, chirp, square, staircase, noise, recorded];
