import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { LoopError } from '../loop/loop.js';
import type { CoefficientValues } from '../loop/parts.js';
import type { Fault as SpecFault } from '../report/index.js';
import { specOfBuild } from '../spec/for_builds.js';
import { formatSpecError } from '../spec/index.js';
import type { Spec } from '../spec/spec.js';
import type { Watch } from '../verdict/crew.js';
import { type Latched, readLatched } from './latched_reference.js';
import { type BuildOptions, type BuildRead, readBuild, valuesOf } from './read_build.js';
import { readSpec, shownPath } from './read_spec.js';
import { savedPlants } from './saved_counterexamples.js';
import { Fault } from './surroundings.js';

/** Which specs to work on, and which images. */
export interface SpecChoice extends BuildOptions {
  /** Spec files, relative to the working folder; every one below it where there are none. */
  specs: readonly string[];
}

/** One build of a spec, read. */
export interface Target {
  spec: Spec;
  /** Of several builds its name. */
  name: string | undefined;
  /** What messages call it. */
  label: string;
  build: BuildRead | undefined;
  coefficients: CoefficientValues;
  /** Counterexamples of earlier runs and the worst plants of the latched reference, tried first; SI. */
  saved: Float64Array[];
  /** Where the spec names a latched reference. */
  latched: Latched | undefined;
}

/** Shows how far long work is; nothing where nobody watches. */
export interface Telling {
  /** Replaces the line that tells it; an empty one takes it away. */
  progress?: (line: string) => void;
  /** Aborted when the user ends the work. */
  interrupted?: AbortSignal;
}

/** What came of each build, and why there is nothing of the others. */
export interface Done<T> {
  results: T[];
  faults: SpecFault[];
}

/**
 * Reads every build of every spec and works on one after another. What cannot be done is kept as a fault, and the next one
 * is begun; after an interrupt no other is.
 * @throws {Fault} where there is no spec at all.
 */
export async function eachBuild<T>(
  cwd: string,
  choice: SpecChoice,
  telling: Telling,
  work: (target: Target, watch: Watch) => Promise<T>,
): Promise<Done<T>> {
  const files = choice.specs.length > 0 ? choice.specs : await specsBelow(cwd);
  const done: Done<T> = { results: [], faults: [] };
  for (const file of files) {
    const specFile = shownPath(cwd, file);
    if (telling.interrupted?.aborted) {
      done.faults.push({ specFile, messages: [`${specFile}: interrupted before it was begun`] });
      continue;
    }
    await keepingFaults(done.faults, specFile, telling, async () => {
      const spec = await readSpec(cwd, file);
      for (const build of buildsOf(spec, choice)) {
        await keepingFaults(done.faults, specFile, telling, async () => {
          done.results.push(await workOn(cwd, build, choice, telling, work));
        });
      }
    });
  }
  telling.progress?.('');
  return done;
}

async function keepingFaults(
  faults: SpecFault[],
  specFile: string,
  { interrupted }: Telling,
  work: () => Promise<void>,
): Promise<void> {
  try {
    await work();
  } catch (error) {
    if (interrupted?.aborted) {
      faults.push({
        specFile,
        messages: [`${specFile}: interrupted before it was finished; nothing of it is judged`],
      });
      return;
    }
    if (!(error instanceof Fault)) throw error;
    faults.push({ specFile, messages: error.lines });
  }
}

/** @throws {Fault} where one image is to stand for several builds. */
function buildsOf(spec: Spec, { image }: SpecChoice): { spec: Spec; name: string | undefined }[] {
  if (!spec.builds) return [{ spec, name: undefined }];
  if (image !== undefined) {
    const names = spec.builds.map(({ name }) => name).join(', ');
    throw new Fault([`${spec.file}: has several builds (${names}), so --image means none of them`]);
  }
  return spec.builds.map(({ name }) => ({ spec: specOfBuild(spec, name)!, name }));
}

async function workOn<T>(
  cwd: string,
  { spec, name }: { spec: Spec; name: string | undefined },
  choice: SpecChoice,
  telling: Telling,
  work: (target: Target, watch: Watch) => Promise<T>,
): Promise<T> {
  telling.interrupted?.throwIfAborted();
  const label = name === undefined ? spec.loop : `${spec.loop}, build ${name}`;
  telling.progress?.(`${label}: reading the build`);
  const latched = await readLatched(cwd, spec, name);
  const build = await readBuild(cwd, spec, { ...choice, interrupted: telling.interrupted });
  const saved = [...(await savedPlants(cwd, spec)), ...(latched?.plants ?? [])];
  const target: Target = { spec, name, label, build, coefficients: valuesOf(build), saved, latched };
  try {
    return await work(target, watchOf(target, telling));
  } catch (error) {
    if (error instanceof LoopError) throw new Fault([formatSpecError(error)]);
    throw error;
  }
}

function watchOf({ label, spec }: Target, { progress, interrupted }: Telling): Watch {
  const asked = spec.perturbation.plants.toLocaleString('en');
  let sum = 0;
  return {
    signal: interrupted,
    done:
      progress &&
      ((plants) => {
        sum += plants;
        progress(`${label}: ${sum.toLocaleString('en')} runs (${asked} independent plants asked for)`);
      }),
  };
}

/** @throws {Fault} when there is none: a gate that judges nothing must not pass. */
async function specsBelow(cwd: string): Promise<string[]> {
  const entries = await readdir(cwd, { recursive: true, withFileTypes: true });
  const found = entries
    .filter((entry) => entry.isFile() && entry.name.endsWith('.pawl.yaml'))
    .map((entry) => shownPath(cwd, join(entry.parentPath, entry.name)))
    .filter((path) => !path.split('/').includes('node_modules'))
    .sort();
  if (found.length === 0) throw new Fault(['no *.pawl.yaml was found below this folder; name a spec']);
  return found;
}
