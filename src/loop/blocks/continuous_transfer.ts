import type { SettingDescription } from '../../spec/vocabulary.js';
import type { TargetArithmetic } from '../arithmetic.js';
import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Block, BlockUse } from './block.js';
import { checkProper, stateChain } from './state_chain.js';

const list = (name: string, meaning: string): SettingDescription => ({
  name,
  kind: 'matrix',
  rows: 'plain',
  columns: 'plain',
  entry: 'ratio',
  optional: true,
  meaning,
});

/** A ratio of polynomials in s, by its coefficients or by its zeros and poles. */
export const continuousTransfer: Block = {
  description: {
    key: 'transfer_function',
    rooms: ['plant'],
    takesInput: true,
    takesGain: true,
    settings: [
      list('numerator', 'coefficients in descending powers of s, with time in seconds'),
      list('denominator', 'coefficients in descending powers of s, with time in seconds'),
      list(
        'zeros',
        'in place of the numerator: a list of [real part, imaginary part] in 1/s; a pair is written once',
      ),
      list('poles', 'in place of the denominator: likewise'),
    ],
    meaning:
      'y = gain · numerator(s)/denominator(s) of, or gain · Π(s − zero)/Π(s − pole) of; the gain has the units',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const { arithmetic: a } = workshop;
    const numerator = polynomial(use, a, 'numerator', 'zeros') ?? [a.number(1)];
    const denominator = polynomial(use, a, 'denominator', 'poles');
    if (!denominator) {
      throw new LoopError(`transfer_function of '${use.name}' needs a denominator, or poles`, use.place);
    }
    checkProper(use, numerator, denominator);
    return stateChain(use.name, numerator, denominator, () => a.multiply(use.gain(), use.input()), workshop);
  },
};

/** The polynomial given by its coefficients or by its roots. */
function polynomial(
  use: BlockUse,
  a: TargetArithmetic,
  coefficients: string,
  roots: string,
): Node[] | undefined {
  const given = use.matrix(coefficients);
  const rows = use.matrix(roots);
  if (given && rows) {
    throw new LoopError(
      `transfer_function of '${use.name}' has both ${coefficients} and ${roots}; expected one`,
      use.place,
    );
  }
  if (!rows) return given?.flat();
  return rows
    .map((row) => factor(use, a, roots, row))
    .reduce((product, one) => times(a, product, one), [a.number(1)]);
}

/** s − r for a real root, s² − 2·Re·s + |r|² for a pair. */
function factor(use: BlockUse, a: TargetArithmetic, roots: string, row: Node[]): Node[] {
  const [real, imaginary = a.number(0)] = row;
  if (row.length > 2) {
    throw new LoopError(
      `${roots} of '${use.name}' has an entry of ${row.length} numbers; expected [real part, imaginary part]`,
      use.place,
    );
  }
  if (imaginary.kind === 'number' && imaginary.value === 0) return [a.number(1), a.apply('negate', real)];
  const size = a.add(a.multiply(real, real), a.multiply(imaginary, imaginary));
  return [a.number(1), a.multiply(a.number(-2), real), size];
}

function times(a: TargetArithmetic, p: Node[], q: Node[]): Node[] {
  const product: Node[] = Array.from({ length: p.length + q.length - 1 }, () => a.number(0));
  p.forEach((x, i) => {
    q.forEach((y, k) => {
      product[i + k] = a.add(product[i + k], a.multiply(x, y));
    });
  });
  return product;
}
