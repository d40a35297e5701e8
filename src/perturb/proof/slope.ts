import {
  common,
  difference,
  down,
  everything,
  type Interval,
  isZero,
  negated,
  product,
  quotient,
  sum,
  up,
} from './interval.js';

/**
 * A quantity over a box of variables: all its values there, its value at the centre, and for each variable all slopes with
 * which it moves away from the centre, so that value = centre + Σ slope·(variable − its centre). Interval slope arithmetic
 * (Krawczyk and Neumaier 1985): what is gained over plain intervals is that a quantity subtracted from itself cancels.
 */
export interface Slope {
  readonly range: Interval;
  readonly centre: Interval;
  readonly slopes: readonly Interval[];
}

const none: Interval = [0, 0];

/** Arithmetic over one box. */
export class SlopeField {
  /** How many products were formed: what the work of a look at a box grows with. */
  products = 0;
  private readonly offsets: Interval[];
  private readonly flat: readonly Interval[];

  /** @param box the bounds of each variable. */
  constructor(readonly box: readonly Interval[]) {
    this.offsets = box.map(([low, high]) => {
      const middle = low + (high - low) / 2;
      return [down(low - middle), up(high - middle)];
    });
    this.flat = box.map(() => none);
  }

  constant(value: number): Slope {
    return { range: [value, value], centre: [value, value], slopes: this.flat };
  }

  /** A constant that is known between bounds only. */
  between(bounds: Interval): Slope {
    return { range: bounds, centre: bounds, slopes: this.flat };
  }

  variable(index: number): Slope {
    const [low, high] = this.box[index];
    const middle = low + (high - low) / 2;
    const slopes = this.box.map((_, i): Interval => (i === index ? [1, 1] : none));
    return { range: [low, high], centre: [middle, middle], slopes };
  }

  add(a: Slope, b: Slope): Slope {
    if (isNothing(a)) return b;
    if (isNothing(b)) return a;
    return this.tight(
      sum(a.range, b.range),
      sum(a.centre, b.centre),
      a.slopes.map((slope, i) => sum(slope, b.slopes[i])),
    );
  }

  subtract(a: Slope, b: Slope): Slope {
    if (isNothing(b)) return a;
    return this.tight(
      difference(a.range, b.range),
      difference(a.centre, b.centre),
      a.slopes.map((slope, i) => difference(slope, b.slopes[i])),
    );
  }

  negate({ range, centre, slopes }: Slope): Slope {
    return { range: negated(range), centre: negated(centre), slopes: slopes.map(negated) };
  }

  multiply(a: Slope, b: Slope): Slope {
    if (isNothing(a) || isNothing(b)) return this.constant(0);
    if (isOne(a)) return b;
    if (isOne(b)) return a;
    this.products++;
    return this.tight(
      product(a.range, b.range),
      product(a.centre, b.centre),
      a.slopes.map((slope, i) => sum(product(slope, b.range), product(a.centre, b.slopes[i]))),
    );
  }

  divide(a: Slope, b: Slope): Slope {
    if (isOne(b)) return a;
    const centre = quotient(a.centre, b.centre);
    return this.tight(
      quotient(a.range, b.range),
      centre,
      a.slopes.map((slope, i) => quotient(difference(slope, product(centre, b.slopes[i])), b.range)),
    );
  }

  /**
   * A function of one quantity.
   * @param bounds all its values over an interval.
   * @param derivative all values of its derivative over an interval.
   */
  apply(a: Slope, bounds: (x: Interval) => Interval, derivative: (x: Interval) => Interval): Slope {
    const steep = derivative(a.range);
    return this.tight(
      bounds(a.range),
      bounds(a.centre),
      a.slopes.map((slope) => product(slope, steep)),
    );
  }

  private tight(range: Interval, centre: Interval, slopes: readonly Interval[]): Slope {
    let around = centre;
    for (let i = 0; i < slopes.length; i++) around = sum(around, product(slopes[i], this.offsets[i]));
    const valid = !Number.isNaN(around[0]) && !Number.isNaN(around[1]);
    const known = Number.isNaN(range[0]) || Number.isNaN(range[1]) ? everything : range;
    return { range: valid ? common(known, around) : known, centre, slopes };
  }
}

/** Whether the quantity is zero all over the box, by its making and not by chance. */
export function isNothing({ range, slopes }: Slope): boolean {
  return isZero(range) && slopes.every(isZero);
}

function isOne({ range, slopes }: Slope): boolean {
  return range[0] === 1 && range[1] === 1 && slopes.every(isZero);
}
