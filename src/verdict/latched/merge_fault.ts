import { measureNamed } from '../../measure/index.js';
import type { Spec, SpecError } from '../../spec/spec.js';

/** The fault of a spec that asks for what only a latched reference can tell, and does not say where that is. */
export function mergeFault({ firmware, merge, requirements }: Spec): SpecError | undefined {
  if (merge) return undefined;
  const [first] = firmware?.law ?? [];
  if (first)
    return {
      place: first.place,
      message: '`law` needs a `merge:` section: its `reference` keeps the digests',
    };
  const asking = requirements.find(({ measure }) => measureNamed(measure).description.againstLatched);
  if (!asking) return undefined;
  const message = `\`${asking.measure}\` needs a \`merge:\` section: its \`reference\` keeps what was latched`;
  return { place: asking.place, message };
}
