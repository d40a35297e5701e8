import type { CoefficientValues } from '../loop/parts.js';
import { measureNamed } from '../measure/index.js';
import type { TracePlot } from '../report/index.js';
import type { Dimension, Requirement, Scenario, Spec, Unit } from '../spec/spec.js';
import { signalsOfStatement } from '../spec/statement.js';
import type { JudgedSpec } from '../verdict/judge_spec.js';
import { bandSizes, thinnedPlants } from './band_plants.js';
import { type FenceContext, fencesOf } from './fences.js';
import { affordable, type Clock } from './fineness.js';
import { type NumbersToDraw, whereItFits } from './numbers_to_draw.js';
import { valuesOfPlant } from './plant_values.js';
import { boundsOver } from './samples.js';
import { ScenarioTraces } from './scenario_traces.js';

type Sampled = Map<string, number[]> | undefined;

/** A signal that is drawn in a scenario, and the requirements that are measured on it. */
interface Drawn {
  signal: string;
  requirements: Requirement[];
}

/**
 * One plot for each scenario and signal that a requirement looks at.
 * @param wide plants whose traces make the band, or some of them; the nominal and the worst plants are added.
 */
export function tracePlots(
  spec: Spec,
  numbers: NumbersToDraw,
  judged: JudgedSpec,
  wide: readonly Float64Array[],
  now: Clock,
): TracePlot[] {
  return spec.scenarios.flatMap((scenario) => plotsOfScenario(spec, numbers, judged, wide, scenario, now));
}

function plotsOfScenario(
  spec: Spec,
  { today, latched }: NumbersToDraw,
  judged: JudgedSpec,
  wide: readonly Float64Array[],
  scenario: Scenario,
  now: Clock,
): TracePlot[] {
  const drawn = drawnIn(spec, scenario);
  if (drawn.length === 0) return [];
  const targets = drawn.flatMap(({ requirements }) => targetOf(requirements) ?? []);
  const signals = [...new Set([...drawn.map(({ signal }) => signal), ...targets])];
  const followed = (numbers: CoefficientValues) =>
    new ScenarioTraces(spec, numbers, scenario, signals, judged.halvings);
  const traces = followed(today);
  const plantOf = new Map(judged.requirements.map(({ name, worst }) => [name, valuesOfPlant(worst)]));
  const nominalValues = Float64Array.from(spec.parameters, (parameter) => parameter.nominal);
  const nominal = traces.of(nominalValues);
  const then = latched && whereItFits(() => followed(latched).of(nominalValues));
  const most = affordable(bandSizes, () => traces.of(nominalValues), now) ?? bandSizes[bandSizes.length - 1];
  const band = thinnedPlants(wide, most);
  const worstOf = new Map(
    drawn.map(({ requirements: [first] }) => [first.name, traces.of(plantOf.get(first.name)!)]),
  );
  const all = [nominal, ...worstOf.values(), ...band.map((plant) => traces.of(plant))];
  return drawn.map(({ signal, requirements }): TracePlot => {
    const target = targetOf(requirements);
    const none = traces.times.map(() => Number.NaN);
    const curves = all.flatMap((one) => (one ? [one.get(signal)!] : []));
    const latchedValues = then?.get(signal);
    return {
      requirements: requirements.map(({ name }) => name),
      signal,
      scenario: scenario.name,
      unit: unitOf(spec, signal, requirements),
      times: traces.times,
      ...boundsOver(curves, traces.times.length),
      nominal: nominal?.get(signal) ?? none,
      ...(latchedValues && { latched: latchedValues }),
      worst: worstOf.get(requirements[0].name)?.get(signal) ?? none,
      target: target === undefined ? undefined : nominal?.get(target),
      fences: requirements.flatMap((requirement) =>
        fencesOf(requirement, {
          signal,
          ...contextOf(requirement, scenario, traces, nominal, nominalValues),
        }),
      ),
    };
  });
}

function drawnIn({ requirements }: Spec, scenario: Scenario): Drawn[] {
  const bySignal = new Map<string, Requirement[]>();
  for (const requirement of requirements) {
    if (requirement.in !== scenario.name) continue;
    for (const signal of signalsOf(requirement)) {
      bySignal.set(signal, [...(bySignal.get(signal) ?? []), requirement]);
    }
  }
  return [...bySignal].map(([signal, those]) => ({ signal, requirements: those }));
}

function signalsOf({ signals, statement }: Requirement): string[] {
  if (statement) return [...new Set(signalsOfStatement(statement))];
  return signals.of === undefined ? [] : [signals.of];
}

function targetOf(requirements: readonly Requirement[]): string | undefined {
  return requirements.find(({ signals }) => signals.to !== undefined)?.signals.to;
}

function contextOf(
  { signals, quantities }: Requirement,
  scenario: Scenario,
  traces: ScenarioTraces,
  nominal: Sampled,
  nominalValues: Float64Array,
): Omit<FenceContext, 'signal'> {
  const target = signals.to === undefined ? undefined : nominal?.get(signals.to);
  return {
    step: signals.to === undefined ? undefined : traces.stepOf(signals.to, nominalValues),
    targetAt: (time) => target?.[traces.times.findLastIndex((one) => one <= time)],
    from: quantities.from ?? traces.firstEvent(nominalValues),
    until: quantities.until ?? scenario.lasts,
  };
}

/**
 * As a requirement's limit is written where it is of the signal's kind, one of another scenario where there is none here, else
 * as the signal is declared.
 */
function unitOf(spec: Spec, signal: string, requirements: readonly Requirement[]): Unit {
  const elsewhere = spec.requirements.filter(({ signals }) => signals.of === signal);
  const written = [...requirements, ...elsewhere].find(
    ({ measure, inDecibels }) => !inDecibels && keepsDimension(measureNamed(measure).description.dimension),
  );
  return written?.unit ?? declaredUnit(spec, signal);
}

/** A dimension that no signal has, to see whether a measure hands its signal's dimension on. */
const probe: Dimension = [101, 0, 0, 0, 0, 0, 0, 0];

function keepsDimension(dimension: (of: Dimension) => Dimension): boolean {
  return dimension(probe)[0] === probe[0] && dimension(probe).every((power, at) => power === probe[at]);
}

function declaredUnit(spec: Spec, name: string): Unit {
  const all = [
    ...spec.inputs,
    ...spec.plant,
    ...spec.sensors,
    ...spec.controllers.flatMap(({ signals }) => signals),
    ...spec.actuators,
  ];
  return all.find((one) => one.name === name)!.unit;
}
