import type { FinishedRun } from '../verdict/run.js';
import type { Markup } from './html/markup.js';
import { drawingStyle, palette } from './html/style.js';
import { gainDrawing } from './plot/gain_plot.js';
import { openLoopDrawing } from './plot/open_loop_plot.js';
import { planeDrawing } from './plot/plane_plot.js';
import { traceDrawing } from './plot/trace_plot.js';
import type { SpecPlots } from './plots.js';
import { blockingFirst } from './verdict_words.js';

/** What draws one requirement of a spec, as an SVG file that looks the same wherever it is opened. */
export interface DrawingFile {
  /** From the folder of the reports, with forward slashes; of letters, digits, dots, dashes and underscores. */
  path: string;
  requirement: string;
  /** What its lines are, in words; undefined where it has none. */
  lines: string | undefined;
  text: string;
}

/** More of them nobody opens one by one: the page has them all. */
const mostOfSpec = 12;
const longestName = 60;

/**
 * A file for each requirement that is not met and is drawn at all, to be attached to a summary.
 * @param plots of the run's specs, in their order.
 * @returns one list for each spec.
 */
export function drawingFiles({ specs }: FinishedRun, plots: readonly SpecPlots[]): DrawingFile[][] {
  return specs.map(({ requirements }, spec) => {
    const blocking = blockingFirst(requirements).filter(({ verdict }) => verdict.kind !== 'met');
    const taken = new Set<string>();
    return blocking
      .flatMap(({ name }) => {
        const drawing = plots[spec] && firstDrawing(name, plots[spec]);
        if (!drawing) return [];
        const { markup, lines } = drawing;
        return [{ path: pathFor(name, spec, taken), requirement: name, lines, text: standingAlone(markup) }];
      })
      .slice(0, mostOfSpec);
  });
}

const lines = 'nominal solid, worst dashed';

function firstDrawing(
  name: string,
  { traces, gains, loops, planes }: SpecPlots,
): { markup: Markup; lines: string | undefined } | undefined {
  const shows = ({ requirements }: { requirements: string[] }): boolean => requirements.includes(name);
  const [trace, gain, loop] = [traces.find(shows), gains.find(shows), loops.find(shows)];
  if (trace) return { markup: traceDrawing(trace, 'd'), lines };
  if (gain) return { markup: gainDrawing(gain, 'd'), lines };
  if (loop) return { markup: openLoopDrawing(loop, 'd'), lines };
  const plane = planes.find(({ requirement }) => requirement === name);
  return plane && { markup: planeDrawing(plane, 'd'), lines: undefined };
}

/** Names of requirements are anybody's text, and those of files are not. */
function pathFor(name: string, spec: number, taken: Set<string>): string {
  const plain = name.replace(/[^A-Za-z0-9._-]+/g, '_').slice(0, longestName);
  let path = `plots/${spec + 1}-${plain}.svg`;
  for (let more = 2; taken.has(path.toLowerCase()); more++) path = `plots/${spec + 1}-${plain}-${more}.svg`;
  taken.add(path.toLowerCase());
  return path;
}

function standingAlone({ text }: Markup): string {
  const style = `<style>${palette}\n${drawingStyle}\nsvg{background:var(--sheet);font-family:sans-serif}</style>`;
  return `${text.replace('<svg ', '<svg xmlns="http://www.w3.org/2000/svg" width="960" ').replace('>', `>${style}`)}\n`;
}
