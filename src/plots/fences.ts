import type { TargetStep } from '../measure/measure.js';
import type { Fence } from '../report/index.js';
import type { Expression, Limit, Requirement } from '../spec/spec.js';
import type { BoundPoint, Statement } from '../spec/statement.js';

/** What a limit in the plane of a trace depends on besides the requirement. */
export interface FenceContext {
  /** The signal that is drawn. */
  signal: string;
  /** The step of the target of the requirement, where it makes one. */
  step: TargetStep | undefined;
  /** The target at a time, where there is one, SI. */
  targetAt: (time: number) => number | undefined;
  /** Where the requirement's window begins and ends, s. */
  from: number;
  until: number;
}

type Side = Fence['forbidden'];

/** The limits of a requirement that can be drawn as lines over its signal; none for those that say something else of it. */
export function fencesOf(requirement: Requirement, context: FenceContext): Fence[] {
  const { measure, limit, quantities, bounds, statement } = requirement;
  const { from, until, step } = context;
  const level = (value: number, forbidden: Side, start = from): Fence =>
    line(requirement, start, value, until, value, forbidden);
  switch (measure) {
    case 'overshoot':
      return step && 'at_most' in limit ? overshootFence(requirement, step, limit.at_most) : [];
    case 'settling_time':
      if (!step || !('at_most' in limit)) return [];
      return settledBand(
        requirement,
        step,
        quantities.band * Math.abs(step.after - step.before),
        limit.at_most,
      );
    case 'recovery_time':
      return 'at_most' in limit
        ? aroundTarget(requirement, context, from + limit.at_most, quantities.band)
        : [];
    case 'peak_deviation':
      return 'at_most' in limit ? aroundTarget(requirement, context, from, limit.at_most) : [];
    case 'peak_effort':
      return 'at_most' in limit ? [level(limit.at_most, 'above'), level(-limit.at_most, 'below')] : [];
    case 'largest_value':
    case 'smallest_value':
      return limitLevels(limit).map(({ value, forbidden }) => level(value, forbidden));
    case 'corridor_clearance':
      return [
        ...corners(requirement, bounds?.upper, 'above'),
        ...corners(requirement, bounds?.lower, 'below'),
      ];
    case 'over_time':
      return statement && 'at_least' in limit
        ? statementFences(requirement, statement, context, limit.at_least)
        : [];
    default:
      return [];
  }
}

function line(
  { name: requirement }: Requirement,
  fromTime: number,
  fromValue: number,
  toTime: number,
  toValue: number,
  forbidden: Side,
): Fence {
  return {
    requirement,
    from: { time: fromTime, value: fromValue },
    to: { time: toTime, value: toValue },
    forbidden,
  };
}

function overshootFence(requirement: Requirement, step: TargetStep, share: number): Fence[] {
  const { before, after, time, until } = step;
  const value = after + share * (after - before);
  return [line(requirement, time, value, until, value, after > before ? 'above' : 'below')];
}

function settledBand(requirement: Requirement, step: TargetStep, half: number, within: number): Fence[] {
  const { after, time, until } = step;
  return [
    line(requirement, time + within, after + half, until, after + half, 'above'),
    line(requirement, time + within, after - half, until, after - half, 'below'),
  ];
}

/** Lines at both sides of a target; none where it moves, for they would not be straight. */
function aroundTarget(requirement: Requirement, context: FenceContext, from: number, half: number): Fence[] {
  const { until, targetAt } = context;
  const [first, last] = [targetAt(from), targetAt(until)];
  if (first === undefined || first !== last || from >= until) return [];
  return [
    line(requirement, from, first + half, until, first + half, 'above'),
    line(requirement, from, first - half, until, first - half, 'below'),
  ];
}

function limitLevels(limit: Limit): { value: number; forbidden: Side }[] {
  if ('at_most' in limit) return [{ value: limit.at_most, forbidden: 'above' }];
  if ('at_least' in limit) return [{ value: limit.at_least, forbidden: 'below' }];
  const [low, high] = limit.between;
  return [
    { value: high, forbidden: 'above' },
    { value: low, forbidden: 'below' },
  ];
}

/**
 * What a statement keeps the drawn signal above or below throughout a window: the levels at which its margin is the limit. Other
 * statements, and comparisons of several signals, are no lines.
 */
function statementFences(
  requirement: Requirement,
  statement: Statement,
  context: FenceContext,
  least: number,
): Fence[] {
  if (statement.kind === 'all_of') {
    return statement.statements.flatMap((one) => statementFences(requirement, one, context, least));
  }
  if (statement.kind !== 'throughout' || statement.that.kind !== 'comparison') return [];
  const { margin, scale } = statement.that;
  const until = Math.min(statement.to ?? context.until, context.until);
  if (margin.kind !== 'operation' || margin.operator !== '-' || !(until > statement.from)) return [];
  const { left, right } = margin;
  const isDrawn = (side: Expression): boolean => side.kind === 'name' && side.name === context.signal;
  const level = (value: number, forbidden: Side): Fence[] => [
    line(requirement, statement.from, value, until, value, forbidden),
  ];
  if (left.kind === 'number' && isDrawn(right)) return level(left.value - least * scale, 'above');
  if (right.kind === 'number' && isDrawn(left)) return level(right.value + least * scale, 'below');
  return [];
}

/** The corridor itself, which the signal must keep clear of by the limit. */
function corners(requirement: Requirement, bound: readonly BoundPoint[] | undefined, side: Side): Fence[] {
  return (bound ?? []).slice(1).flatMap((corner, i) => {
    const before = bound![i];
    return corner.time > before.time
      ? [line(requirement, before.time, before.value, corner.time, corner.value, side)]
      : [];
  });
}
