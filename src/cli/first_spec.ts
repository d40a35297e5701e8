import { stringify } from 'yaml';
import type { Candidate } from '../firmware/index.js';
import { chooseLaw, type Law, type Role, rounded } from './choose_law.js';

/** Coefficients that the law does not use are shown for copying, so many at most. */
const mostShown = 40;

/**
 * The text of a first spec: the law that the names in the image suggest, around a plant that it controls well, so that it
 * runs at once and there is something to change. Undefined where no number in the image is usable.
 * @param image its path relative to the spec.
 */
export function firstSpec(name: string, image: string, found: readonly Candidate[]): string | undefined {
  const law = chooseLaw(found);
  if (!law) return undefined;
  const used = new Set(Object.values(law.roles).map(({ request }) => request.at));
  const others = found.filter(({ request }) => !used.has(request.at));
  return `# A first spec: it loads and runs as it is. The plant, the scenario and the limits are made up;
# put yours in their place. The coefficients are those of the image.
pawl: 1
loop: ${scalar(name)}

firmware:
  image: ${scalar(image)}
  # build: [make]                  # a command that makes the image, run in this file's folder
  # law: [control_step]            # functions whose machine code must be the latched one; needs merge
  coefficients:                    # symbol, members, [indices] in the build
${coefficientLines(law)}
${otherLines(others)}
parameters:                        # what is uncertain about the plant
  gain:     { nominal: ${law.plant.gain}, spread: 10 % }
  response: { nominal: ${law.plant.response} s, spread: 20 % }

inputs:
  target: {}

plant:
  output: { lag: response, of: actuator, gain: gain }

sensors:
  sensor: { of: output }

controllers:
  law:
    every: ${law.every}
    delay: 0 s                     # from the sampling instant to when the result takes effect
    arithmetic: float64            # how the target computes: float64, float32, float32_fused …
    signals:
      error:   { value: target - sensor }
      command: ${law.block}

actuators:
  actuator: { of: command }

scenarios:
  step:
    lasts: ${law.lasts} s
    inputs: { target: { step: 1, at: ${rounded(law.lasts / 10)} s } }

requirements:
  - { name: OVERSHOOT,    measure: overshoot,    of: output, to: target, in: step, at_most: 50 %,
      reason: Say here what this limit protects. }
  - { name: PHASE-MARGIN, measure: phase_margin, at: actuator, at_least: 30 deg }
  - { name: GAIN-MARGIN,  measure: gain_margin,  at: actuator, at_least: 6 dB }

perturbation:
  plants: 100
  seed: 1

# merge:                           # what later changes are held against; pawl latch --reason "…" writes it
#   reference: latched/${name.replace(/[^\w.-]+/g, '_')}.json
#   may_slip: 5 %                  # headroom that a change may cost
`;
}

function coefficientLines({ roles, units }: Law): string {
  return Object.entries(roles)
    .map(([role, { request }]) => {
      const unit = units[role as Role];
      const parts = [`at: ${scalar(request.at)}`];
      if (request.format !== undefined) parts.push(`format: ${request.format}`);
      if (unit !== undefined) parts.push(`unit: ${unit}`);
      return `    ${role}: { ${parts.join(', ')} }`;
    })
    .join('\n');
}

function otherLines(others: readonly Candidate[]): string {
  if (others.length === 0) return '';
  const lines = others
    .slice(0, mostShown)
    .map(
      ({ request }) =>
        `    # ${request.name}: ${scalar(request.format === undefined ? request.at : `{ at: ${request.at}, format: ${request.format} }`)}`,
    );
  const left = others.length - lines.length;
  if (left > 0) lines.push(`    # and ${left} more: pawl read shows them`);
  return `    # The image holds these too:\n${lines.join('\n')}\n`;
}

/** A text as it must stand in a flow mapping of YAML. */
function scalar(text: string): string {
  return stringify(text, { collectionStyle: 'flow', lineWidth: 0 }).trimEnd();
}
