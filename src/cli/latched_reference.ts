import { readFile } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import { formatSpecError } from '../spec/index.js';
import type { Spec } from '../spec/spec.js';
import type { JudgedSpec, JudgeOptions } from '../verdict/judge_spec.js';
import { againstReference } from '../verdict/latched/against_reference.js';
import {
  coefficientChanges,
  coefficientUnits,
  latchedNumbers,
  withLatched,
} from '../verdict/latched/coefficient_changes.js';
import { mergeFault } from '../verdict/latched/merge_fault.js';
import { type Reference, readReference } from '../verdict/latched/reference.js';
import { referencePlants } from '../verdict/latched/reference_plants.js';
import type { PlantSetup } from '../verdict/plant_answers.js';
import type { SpecRun } from '../verdict/run.js';
import type { Target } from './each_build.js';
import { shownPath } from './read_spec.js';
import { Fault } from './surroundings.js';

/** The latched reference that a spec names for a build. */
export interface Latched {
  /** As people see it. */
  path: string;
  /** Undefined where there is no such file yet. */
  reference: Reference | undefined;
  /** Its worst plants within today's bounds; SI. */
  plants: Float64Array[];
}

/** The absolute path of a latched reference; of several builds each has its own, `axis.left.json` beside `axis.json`. */
export function referencePath(cwd: string, { file, merge }: Spec, build: string | undefined): string {
  const path = resolve(dirname(resolve(cwd, file)), merge!.reference);
  return build === undefined ? path : path.replace(/(\.json)?$/, `.${build.replace(/[^\w.-]/g, '_')}$1`);
}

/**
 * Reads the latched reference of a build; undefined where the spec has no merge section.
 * @throws {Fault} where there is a file that cannot be read: a gate must not take it for none.
 */
export async function readLatched(
  cwd: string,
  spec: Spec,
  build: string | undefined,
): Promise<Latched | undefined> {
  const fault = mergeFault(spec);
  if (fault) throw new Fault([formatSpecError(fault)]);
  if (!spec.merge) return undefined;
  const path = referencePath(cwd, spec, build);
  const shown = shownPath(cwd, path);
  const text = await textOf(path, shown, spec);
  const read = text === undefined ? undefined : readReference(text);
  if (read?.kind === 'fault') throw unreadable(shown, read.message, spec);
  const reference = read?.reference;
  return { path: shown, reference, plants: referencePlants(reference, spec) };
}

async function textOf(path: string, shown: string, spec: Spec): Promise<string | undefined> {
  try {
    return await readFile(path, 'utf8');
  } catch (error) {
    const { code, message } = error as NodeJS.ErrnoException;
    if (code === 'ENOENT') return undefined;
    throw unreadable(shown, code === 'EISDIR' ? 'it is a folder' : message.split(',')[0], spec);
  }
}

function unreadable(shown: string, what: string, { merge }: Spec): Fault {
  const message = `the latched reference ${shown} cannot be read: ${what}; take it from version control, or delete it and write it anew with pawl latch`;
  return new Fault([formatSpecError({ place: merge!.place, message })]);
}

/** What the plants of a build are measured with: its coefficients, and what they are compared with. */
export function setupOf({
  spec,
  coefficients,
  latched,
}: Pick<Target, 'spec' | 'coefficients' | 'latched'>): PlantSetup {
  const { path, reference } = latched ?? {};
  if (reference) {
    const numbers = latchedNumbers(reference, coefficients, coefficientUnits(spec));
    return { spec, coefficients, latched: numbers };
  }
  const why = `there is no latched reference ${path} yet to compare with; write it with pawl latch`;
  return { spec, coefficients, latched: new Map([...coefficients.keys()].map((name) => [name, why])) };
}

/** What the plants are measured with where the latched coefficients stand in today's place; undefined where they are the same. */
export function latchedSetupOf({
  spec,
  coefficients,
  latched,
}: Pick<Target, 'spec' | 'coefficients' | 'latched'>): PlantSetup | undefined {
  const reference = latched?.reference;
  if (!reference) return undefined;
  const changes = coefficientChanges(reference, coefficients, coefficientUnits(spec));
  const numbers = withLatched(coefficients, reference, changes);
  return numbers && { spec, coefficients: numbers };
}

/**
 * What the latched reference leaves of a judged build's verdicts, and what changed since.
 * @param today the day on which waivers must still count, YYYY-MM-DD.
 * @throws {LoopError} where the build's numbers do not fit the spec.
 */
export async function heldAgainstLatched(
  { spec, build, coefficients, saved, latched }: Target,
  judged: JudgedSpec,
  today: string,
  { workers, watch, latchedCrew }: JudgeOptions,
): Promise<Pick<SpecRun, 'requirements' | 'sinceLatched'>> {
  if (!latched) return { requirements: judged.requirements };
  const { path, reference } = latched;
  const [law, compilers] = [build?.law ?? [], build?.provenance.compilers ?? []];
  return againstReference(
    { spec, judged, coefficients, reference, path, law, compilers, today },
    { workers, watch, saved, latchedCrew },
  );
}
