/** What a command may touch outside itself; handed in, so that tests need no spying. */
export interface Surroundings {
  /** Working folder, absolute. */
  cwd: string;
  /** Writes to standard output. */
  print: (text: string) => void;
  /** Writes to standard error. */
  complain: (text: string) => void;
  /** Whether standard output is a terminal that shows colours. */
  colour: boolean;
  /** Columns of the terminal. */
  width: number;
  /** The day on which waivers must still count, YYYY-MM-DD in UTC. */
  today: string;
  /** Environment variables, by which a command knows the CI server it runs on. */
  environment: Readonly<Record<string, string | undefined>>;
  /** Replaces the line that tells how far long work is; undefined where no terminal would show it. */
  progress?: (line: string) => void;
  /** Aborted when the user ends the work. */
  interrupted?: AbortSignal;
}

/** A day as ISO 8601 writes it, in UTC. */
export function isoDay(time: Date): string {
  return time.toISOString().slice(0, 10);
}

/** The three ways a command can end; see the README. */
export type ExitStatus = 0 | 1 | 2;

/** A user's mistake, or a build or file that fails: one line for people for each fault, no stack trace; exit status 2. */
export class Fault extends Error {
  constructor(readonly lines: readonly string[]) {
    super(lines.join('\n'));
  }
}
