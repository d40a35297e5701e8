import type { CoefficientValues } from '../loop/parts.js';
import { PlantEvaluator } from '../measure/evaluate_plant.js';
import { ParameterSpace } from '../perturb/parameter_space.js';
import type { HeadroomPlane, PlaneAxis } from '../report/index.js';
import type { Spec } from '../spec/spec.js';
import { judge } from '../verdict/judge.js';
import type { JudgedSpec } from '../verdict/judge_spec.js';
import type { RequirementRun } from '../verdict/run.js';
import { affordable, type Clock } from './fineness.js';

/** Values of each parameter; fewer, or no plane, where a plant takes long. */
const fineness = [9, 7, 5];
/** Planes are drawn for what blocks the merge and for what comes nearest to it, so many in all. */
const mostPlanes = 3;

/**
 * The headroom over the two parameters that matter most, all others nominal: for requirements that do not hold, and for
 * those with the least headroom.
 */
export function headroomPlanes(
  spec: Spec,
  coefficients: CoefficientValues,
  { requirements, halvings }: JudgedSpec,
  now: Clock,
): HeadroomPlane[] {
  const chosen = requirements
    .filter(({ effects, holdsFor }) => holdsFor !== 'nominal' && (effects?.length ?? 0) >= 2)
    .sort((a, b) => urgency(a) - urgency(b))
    .slice(0, mostPlanes);
  return chosen.flatMap((run) => planeOf(spec, coefficients, run, halvings, now));
}

function urgency({ verdict, worst }: RequirementRun): number {
  return verdict.kind === 'met' ? (worst.headroom ?? 1) : Number.NEGATIVE_INFINITY;
}

function planeOf(
  spec: Spec,
  coefficients: CoefficientValues,
  run: RequirementRun,
  halvings: number,
  now: Clock,
): HeadroomPlane[] {
  const requirement = spec.requirements.find(({ name }) => name === run.name)!;
  const evaluator = new PlantEvaluator({ ...spec, requirements: [requirement] }, coefficients);
  const space = new ParameterSpace(spec.parameters, spec.perturbation);
  const measure = (plant: Float64Array) => evaluator.evaluate(plant, halvings)[0];
  const cells = fineness.map((steps) => steps * steps);
  const count = affordable(cells, () => measure(space.nominal), now);
  if (count === undefined) return [];
  const steps = fineness[cells.indexOf(count)];
  const [x, y] = run.effects!.slice(0, 2).map(({ name }) => axisOf(spec, run, name, steps));
  const [column, row] = [x, y].map((axis) =>
    spec.parameters.findIndex(({ name }) => name === axis.parameter),
  );
  const headroomAt = (valueX: number, valueY: number): number => {
    const plant = space.nominal.slice();
    plant[column] = valueX;
    plant[row] = valueY;
    space.completed(plant);
    if (!space.allows(plant)) return Number.NaN;
    const judgement = judge(requirement, measure(plant));
    return judgement.kind === 'unjudged' ? Number.NaN : (judgement.headroom ?? Number.NEGATIVE_INFINITY);
  };
  const headroom = y.values.map((valueY) => x.values.map((valueX) => headroomAt(valueX, valueY)));
  return [{ requirement: run.name, x, y, headroom }];
}

function axisOf({ parameters }: Spec, { worst }: RequirementRun, name: string, steps: number): PlaneAxis {
  const { unit, nominal, low, high } = parameters.find((parameter) => parameter.name === name)!;
  return {
    parameter: name,
    unit,
    values: Array.from({ length: steps }, (_, at) => low + (at * (high - low)) / (steps - 1)),
    nominal,
    worst: worst.parameters.find((parameter) => parameter.name === name)!.value,
  };
}
