import type { MeasureResult } from '../measure/measure.js';
import type { Requirement, Unit } from '../spec/spec.js';
import type { ParameterValue, Verdict } from '../verdict/run.js';
import { formatResult } from './format_value.js';
import { parameterTable } from './parameter_table.js';
import { oneLine } from './plain_text.js';
import { plantInWords } from './plant_in_words.js';
import { limitInWords, limitNumbers, measureInWords } from './requirement_in_words.js';
import { siUnit } from './si_unit.js';
import { type PlotLine, terminalPlot } from './terminal_plot.js';
import { verdictSigns } from './verdict_words.js';

/** A signal over time, SI, of the replayed plant and of the nominal one. */
export interface ReplayedSignal {
  name: string;
  unit: Unit;
  values: readonly number[];
  nominal: readonly number[];
}

/** One counterexample that was run again. */
export interface Replayed {
  requirement: Requirement;
  kind: Verdict['kind'];
  result: MeasureResult;
  parameters: ParameterValue[];
  isShrunk: boolean;
  isSameImage: boolean;
  traces: { times: readonly number[]; signals: readonly ReplayedSignal[] } | undefined;
  files: { csv: string | undefined; kept: string | undefined };
}

/** What a replay says: the finding, the plant, and the response against the nominal one. */
export function replayText(replayed: Replayed, { width }: { width: number }): string {
  const { requirement, kind, result, parameters, isShrunk, isSameImage, files } = replayed;
  const words = { ...requirement, scenario: requirement.in };
  const lines = [
    `${verdictSigns[kind]} ${oneLine(requirement.name)} ${kind}: ${measureInWords(words)}: ${formatResult(result, requirement, limitNumbers(requirement.limit))}; limit ${limitInWords(requirement.limit, requirement)}`,
    `${isShrunk ? 'the counterexample nearest to nominal' : 'the worst plant'}: ${plantInWords({ parameters })}`,
    ...(isSameImage ? [] : ['the image is not the one of the report']),
    '',
    parameterTable({ parameters }),
    '',
    plotOf(replayed, Math.min(100, Math.max(60, width))),
    ...(files.csv === undefined ? [] : [`traces: ${files.csv}`]),
    ...(files.kept === undefined ? [] : [`kept in ${files.kept}: every later check tries this plant first`]),
  ];
  return `${lines.join('\n')}\n`;
}

function plotOf({ requirement, traces }: Replayed, width: number): string {
  const of = traces?.signals.find(({ name }) => name === requirement.signals.of);
  if (!traces || !of) return 'no trace: the requirement is about the loop or the build, not about a scenario';
  const inUnit = (values: readonly number[]): number[] => values.map((value) => value / of.unit.scale);
  const to = traces.signals.find(({ name }) => name === requirement.signals.to);
  const lines: PlotLine[] = [
    ...(to ? [{ mark: '-', name: oneLine(to.name), values: inUnit(to.values) }] : []),
    { mark: '·', name: 'nominal', values: inUnit(of.nominal) },
    { mark: '*', name: oneLine(of.name), values: inUnit(of.values) },
  ];
  return terminalPlot(traces.times, lines, of.unit.text, width);
}

/** Traces as comma-separated values (RFC 4180): time in s, then each signal in its SI unit, then the nominal plant's. */
export function tracesInCsv(times: readonly number[], signals: readonly ReplayedSignal[]): string {
  const head = (suffix: string): string[] =>
    signals.map(({ name, unit }) => `${name}${suffix} (${siUnit(unit)})`);
  const rows = times.map((time, at) => [
    time,
    ...signals.map(({ values }) => values[at]),
    ...signals.map(({ nominal }) => nominal[at]),
  ]);
  const numbers = rows.map((row) => row.map((x) => (Number.isFinite(x) ? String(x) : '')).join(','));
  return [['time (s)', ...head(''), ...head(' nominal')].join(','), ...numbers, ''].join('\r\n');
}
