import type { Evaluation } from '../loop/evaluate.js';
import type { Loop, SignalRange } from '../loop/loop.js';
import type { Spec } from '../spec/spec.js';

/**
 * What counts as one where signals are compared in size, so that no result depends on a unit in which a signal is written:
 * the width of its own range where every one has a range, else one in SI (the spec reader has seen to it that all are then
 * of one dimension). Of one signal alone nothing is compared.
 */
export class OpenedSizes {
  private readonly scales: number[];
  private readonly ranges: SignalRange[] | undefined;

  constructor(
    spec: Spec,
    private readonly loop: Loop,
  ) {
    // Sensors and controller signals are opened in their declared units, actuators in SI.
    const declared = [...spec.sensors, ...spec.controllers.flatMap(({ signals }) => signals)];
    this.scales = loop.openings.map(({ at }) => declared.find(({ name }) => name === at)?.unit.scale ?? 1);
    const ranges = loop.openings.flatMap(({ at }) => loop.signals.get(at)?.range ?? []);
    this.ranges = ranges.length === loop.openings.length ? ranges : undefined;
  }

  /** For each opened signal, in the unit in which it is opened; or why one has no size. */
  at(evaluation: Evaluation): { kind: 'sizes'; sizes: number[] } | { kind: 'unformed'; why: string } {
    const { openings } = this.loop;
    if (openings.length === 1) return { kind: 'sizes', sizes: [1] };
    const inSI = openings.map((_, i) =>
      this.ranges === undefined ? 1 : widthOf(this.ranges[i], evaluation),
    );
    const empty = inSI.findIndex((size) => !(size > 0 && Number.isFinite(size)));
    if (empty < 0) return { kind: 'sizes', sizes: inSI.map((size, i) => size / this.scales[i]) };
    const why = `the range of '${openings[empty].at}' is ${inSI[empty]} wide (SI), so that its values have no size; expected a width above 0`;
    return { kind: 'unformed', why };
  }
}

function widthOf({ low, high }: SignalRange, evaluation: Evaluation): number {
  return evaluation.of(high) - evaluation.of(low);
}
