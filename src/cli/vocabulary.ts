import { blocks } from '../loop/blocks/index.js';
import { shapes } from '../loop/inputs/index.js';
import { measures } from '../measure/index.js';
import type { Vocabulary } from '../spec/vocabulary.js';

/** Everything that a spec may use. */
export const vocabulary: Vocabulary = {
  blocks: blocks.map(({ description }) => description),
  shapes: shapes.map(({ description }) => description),
  measures: measures.map(({ description }) => description),
};
