import { oneLine, shortened } from '../report/plain_text.js';

/** A terminal. */
interface Terminal {
  columns: number;
  write: (text: string) => unknown;
}

/** Between two writings, ms. */
const pause = 100;

/**
 * Writes a line over the one before it, at most ten times a second, so that long work shows how far it is. An empty line
 * takes it away at once.
 * @param now the time in ms.
 */
export function progressLine(terminal: Terminal, now: () => number): (line: string) => void {
  let last = Number.NEGATIVE_INFINITY;
  let shown = false;
  return (line) => {
    if (line === '' ? !shown : now() - last < pause) return;
    last = line === '' ? Number.NEGATIVE_INFINITY : now();
    shown = line !== '';
    terminal.write(`\r\u001b[K${shortened(oneLine(line), Math.max(1, terminal.columns - 1))}`);
  };
}
