const signals = ['SIGINT', 'SIGTERM', 'SIGHUP'] as const;

/** A watched group of processes: a program and whatever it started. */
export interface WatchedGroup {
  /** Resolves only when the time limit ended the group. */
  ended: Promise<'too slow'>;
  /** Stops watching, once the program has ended by itself. */
  release(): void;
}

/**
 * Sees to it that a program and its children end at a time limit, and also when this process is interrupted: they stand in
 * a group of their own, which the terminal's interrupt does not reach.
 */
export function watchGroup(pid: number | undefined, timeLimitSeconds: number): WatchedGroup {
  const end = () => endGroup(pid);
  const interrupted = (signal: NodeJS.Signals) => {
    end();
    release();
    // Handlers of our own caller have run or will run; without any, the default must still happen.
    if (process.listenerCount(signal) === 0) process.kill(process.pid, signal);
  };
  let timer: NodeJS.Timeout | undefined;
  const ended = new Promise<'too slow'>((resolve) => {
    timer = setTimeout(() => {
      end();
      resolve('too slow');
    }, timeLimitSeconds * 1000);
  });
  for (const signal of signals) process.on(signal, interrupted);
  process.on('exit', end);
  const release = () => {
    clearTimeout(timer);
    for (const signal of signals) process.off(signal, interrupted);
    process.off('exit', end);
  };
  return { ended, release };
}

function endGroup(pid: number | undefined): void {
  if (pid === undefined) return;
  try {
    process.kill(process.platform === 'win32' ? pid : -pid, 'SIGKILL');
  } catch {
    // It has ended already.
  }
}
