const signals = ['SIGINT', 'SIGTERM', 'SIGHUP'] as const;

/** When a program and its children are ended before they end by themselves. */
export interface ProgramLimits {
  timeLimitSeconds: number;
  /** Aborted when the user ends the work; without it the signals of this process are heard instead. */
  interrupted?: AbortSignal;
}

/** Why a program was ended. */
export type Ended = 'too slow' | 'interrupted';

/** ms in which a program may put things in order, as `make` removes the file it was making. */
const grace = 2000;

/**
 * The result of a program, unless it and its children had to be ended first: they stand in a group of their own, which the
 * terminal's interrupt does not reach. They are asked to end, and soon after made to.
 */
export async function watchGroup<T extends object>(
  program: PromiseLike<T> & { pid?: number },
  { timeLimitSeconds, interrupted }: ProgramLimits,
): Promise<T | Ended> {
  const { pid } = program;
  let end: (why: Ended) => void = () => {};
  const ended = new Promise<Ended>((resolve) => {
    end = resolve;
  });
  const timer = setTimeout(() => end('too slow'), timeLimitSeconds * 1000);
  const stopListening = interrupted ? onAbort(interrupted, () => end('interrupted')) : onSignals(pid);
  const kill = () => tellGroup(pid, 'SIGKILL');
  process.on('exit', kill);
  try {
    const first = await Promise.race([program, ended]);
    if (first === 'too slow' || first === 'interrupted') await endGroup(program);
    return first;
  } finally {
    clearTimeout(timer);
    stopListening();
    process.off('exit', kill);
  }
}

function onAbort(signal: AbortSignal, heard: () => void): () => void {
  if (signal.aborted) heard();
  signal.addEventListener('abort', heard, { once: true });
  return () => signal.removeEventListener('abort', heard);
}

function onSignals(pid: number | undefined): () => void {
  const heard = (signal: NodeJS.Signals) => {
    tellGroup(pid, 'SIGKILL');
    stop();
    // Handlers of our own caller have run or will run; without any, the default must still happen.
    if (process.listenerCount(signal) === 0) process.kill(process.pid, signal);
  };
  const stop = () => {
    for (const signal of signals) process.off(signal, heard);
  };
  for (const signal of signals) process.on(signal, heard);
  return stop;
}

async function endGroup(program: PromiseLike<unknown> & { pid?: number }): Promise<void> {
  tellGroup(program.pid, 'SIGTERM');
  let timer: NodeJS.Timeout | undefined;
  const overdue = new Promise((resolve) => {
    timer = setTimeout(resolve, grace);
  });
  await Promise.race([program, overdue]);
  clearTimeout(timer);
  tellGroup(program.pid, 'SIGKILL');
}

function tellGroup(pid: number | undefined, signal: NodeJS.Signals): void {
  if (pid === undefined) return;
  try {
    process.kill(process.platform === 'win32' ? pid : -pid, signal);
  } catch {
    // It has ended already.
  }
}
