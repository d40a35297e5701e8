/**
 * Damages images of all formats 100,000 times and reads each: there must be a value or a clear error, within a second and
 * within 300 MB. Run after `npm run build`: `node tests/firmware/mutate.mjs [COUNT [FIRST_SEED]]`; a failure names the image and
 * the seed which make it again.
 */
import { fork } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { mutated, tryImageInTime } from './mutation.mjs';
import { askedPaths, soundImages } from './mutation_images.mjs';

const limits = { seconds: 1, bytes: 300e6 };
const workers = 2;
const self = fileURLToPath(import.meta.url);

if (process.send) await work(Number(process.argv[2]), Number(process.argv[3]), Number(process.argv[4]));
else await lead(Number(process.argv[2] ?? 100_000), Number(process.argv[3] ?? 1));

/** Tries every second seed, and tells the leader what came out. */
async function work(first, count, step) {
  const library = await import('../../dist/firmware/index.js');
  const folder = mkdtempSync(join(tmpdir(), 'pawl-mutate-'));
  const images = [...soundImages(folder)];
  rmSync(folder, { recursive: true });
  // Most of the work is clear errors: a short stack is enough to find a fault by.
  Error.stackTraceLimit = 4;
  const sum = { images: 0, values: 0, errors: 0, slowest: 0, memory: 0, failures: [] };
  for (let seed = first; seed < first + count && sum.failures.length < 5; seed += step) {
    const [name, bytes] = images[Math.floor(seed / step) % images.length];
    sum.images++;
    try {
      const outcome = tryImageInTime(library, mutated(bytes, seed), askedPaths, 'int8', limits.seconds);
      sum.values += outcome.values;
      sum.errors += outcome.errors;
      sum.slowest = Math.max(sum.slowest, outcome.seconds);
      if (outcome.seconds > limits.seconds)
        sum.failures.push(`${name}, seed ${seed}: ${outcome.seconds.toFixed(2)} s`);
    } catch (error) {
      sum.failures.push(`${name}, seed ${seed}: ${error.stack}`);
    }
    if (seed % 512 < step) {
      // Node frees a decompressor that failed only when its event loop turns.
      await new Promise(setImmediate);
      globalThis.gc();
      process.send({ seed });
    }
  }
  sum.memory = process.resourceUsage().maxRSS * 1024;
  if (sum.memory > limits.bytes) sum.failures.push(`took ${Math.round(sum.memory / 1e6)} MB`);
  process.send(sum);
}

async function lead(count, first) {
  const started = performance.now();
  const sums = await Promise.all(Array.from({ length: workers }, (_, i) => outcomeOf(first + i, count)));
  const total = (pick) => sums.reduce((sum, each) => sum + pick(each), 0);
  const most = (pick) => Math.max(...sums.map(pick));
  const seconds = ((performance.now() - started) / 1000).toFixed(0);
  console.log(
    `${total((s) => s.images)} damaged images: ${total((s) => s.values)} values, ${total((s) => s.errors)} clear errors, ` +
      `slowest ${most((s) => s.slowest).toFixed(2)} s, most memory ${Math.round(most((s) => s.memory) / 1e6)} MB, in ${seconds} s`,
  );
  const failures = sums.flatMap((s) => s.failures);
  for (const failure of failures) console.error(failure);
  process.exitCode = failures.length > 0 || total((s) => s.images) < count ? 1 : 0;
}

/** A worker that says nothing for a minute hangs: it is ended, and its last seed named. */
function outcomeOf(first, count) {
  return new Promise((resolve) => {
    // Memory is what one image needs, not what lies about unswept: the heap is kept small and swept now and then.
    const worker = fork(self, [String(first), String(count), String(workers)], {
      execArgv: ['--max-old-space-size=128', '--expose-gc'],
    });
    let last = first;
    let sum = {
      images: 0,
      values: 0,
      errors: 0,
      slowest: 0,
      memory: 0,
      failures: [`the worker from seed ${first} ended early`],
    };
    const hung = () => {
      sum.failures = [`hangs after seed ${last}`];
      worker.kill('SIGKILL');
    };
    let timer = setTimeout(hung, 60_000);
    worker.on('message', (message) => {
      clearTimeout(timer);
      if (message.seed === undefined) sum = message;
      else {
        last = message.seed;
        timer = setTimeout(hung, 60_000);
      }
    });
    worker.on('exit', () => {
      clearTimeout(timer);
      resolve(sum);
    });
  });
}
