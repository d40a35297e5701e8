import { formatNumber } from './format_value.js';

/** One line of a plot in text. */
export interface PlotLine {
  /** One character that stands for it. */
  mark: string;
  name: string;
  /** At the times of the plot; not-a-number where there is nothing. */
  values: readonly number[];
}

const rows = 15;
const labelWidth = 10;

/**
 * Lines over time as text, later ones on top of earlier ones: the values at the left edge, the time below.
 * @param times s, rising.
 * @param unit of the values, as written at the top.
 * @param width columns to fill.
 */
export function terminalPlot(
  times: readonly number[],
  lines: readonly PlotLine[],
  unit: string,
  width: number,
): string {
  const finite = lines.flatMap(({ values }) => values.filter(Number.isFinite));
  if (times.length === 0 || finite.length === 0) return 'there is nothing to draw\n';
  let low = finite.reduce((least, value) => Math.min(least, value));
  let high = finite.reduce((most, value) => Math.max(most, value));
  const room = 0.5 * Math.max(1, Math.abs(low));
  if (low === high) [low, high] = [low - room, high + room];
  const columns = Math.max(20, width - labelWidth - 2);
  const cells = Array.from({ length: rows }, () => new Array<string>(columns).fill(' '));
  const [first, last] = [times[0], times[times.length - 1]];
  for (const { mark, values } of lines) {
    values.forEach((value, at) => {
      if (!Number.isFinite(value)) return;
      const column = Math.round(((times[at] - first) / (last - first || 1)) * (columns - 1));
      const row = Math.round(((high - value) / (high - low)) * (rows - 1));
      cells[row][column] = mark;
    });
  }
  const label = (row: number): string => {
    const isLabelled = row === 0 || row === rows - 1 || row === (rows - 1) / 2;
    const exact = high - (row / (rows - 1)) * (high - low);
    const value = Math.abs(exact) < 1e-3 * (high - low) ? 0 : exact;
    return (isLabelled ? formatNumber(value, 4) : '').padStart(labelWidth);
  };
  const end = `${formatNumber(last, 4)} s`;
  return [
    `${' '.repeat(labelWidth)} ${unit}   ${lines.map(({ mark, name }) => `${mark} ${name}`).join('   ')}`.trimEnd(),
    ...cells.map((row, at) => `${label(at)} │${row.join('').trimEnd()}`),
    `${' '.repeat(labelWidth)} └${'─'.repeat(columns)}`,
    `${' '.repeat(labelWidth + 2)}${formatNumber(first, 4).padEnd(columns - end.length)}${end}`,
    '',
  ].join('\n');
}
