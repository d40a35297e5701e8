/**
 * A number that cannot be formed: a singular matrix, an iteration that reached its cap, a figure that is not finite.
 * It tells such a case apart from a bug, so that a measure can be reported as not formed, with this message as the reason.
 */
export class NumericFailure extends Error {
  override name = 'NumericFailure';
}
