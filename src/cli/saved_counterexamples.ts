import { mkdir, readFile, writeFile } from 'node:fs/promises';
import { dirname, resolve } from 'node:path';
import { z } from 'zod';
import type { Spec } from '../spec/spec.js';
import { shownPath } from './read_spec.js';
import { Fault } from './surroundings.js';

/** One plant that broke a requirement: its parameters by name, SI. */
interface SavedCounterexample {
  requirement: string;
  plant: Record<string, number>;
}

const shape = z.strictObject({
  pawl: z.literal(1),
  counterexamples: z.array(
    z.strictObject({ requirement: z.string(), plant: z.record(z.string(), z.number()) }),
  ),
});

/** Where a spec's counterexamples are saved: beside its latched reference, or beside the spec where it names none. */
function pathOf(cwd: string, spec: Spec): string {
  const file = resolve(cwd, spec.file);
  const beside = spec.merge ? resolve(dirname(file), spec.merge.reference) : file;
  return `${beside.replace(/(\.pawl)?\.(json|ya?ml)$/, '')}.counterexamples.json`;
}

/**
 * The saved counterexamples as plants, SI, in the order of the parameters. A parameter that is not saved is nominal; a plant
 * that now lies outside the bounds is left out.
 * @throws {Fault} where the file is there but cannot be read.
 */
export async function savedPlants(cwd: string, spec: Spec): Promise<Float64Array[]> {
  const { parameters } = spec;
  const plants = (await readSaved(cwd, spec)).map(({ plant }) =>
    Float64Array.from(parameters, ({ name, nominal, derived }) =>
      derived ? nominal : Object.hasOwn(plant, name) ? plant[name] : nominal,
    ),
  );
  return plants.filter((values) =>
    parameters.every(({ low, high, derived }, i) => derived || (values[i] >= low && values[i] <= high)),
  );
}

async function readSaved(cwd: string, spec: Spec): Promise<SavedCounterexample[]> {
  const path = pathOf(cwd, spec);
  let text: string;
  try {
    text = await readFile(path, 'utf8');
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return [];
    throw new Fault([`${shownPath(cwd, path)}: cannot be read: ${(error as Error).message}`]);
  }
  const parsed = shape.safeParse(asJson(text));
  if (parsed.success) return parsed.data.counterexamples;
  throw new Fault([
    `${shownPath(cwd, path)}: holds no saved counterexamples: expected { "pawl": 1, "counterexamples": [ { "requirement", "plant" } ] }; put it right or delete it`,
  ]);
}

function asJson(text: string): unknown {
  try {
    return JSON.parse(text);
  } catch {
    return undefined;
  }
}

/** Adds a counterexample to the saved ones, unless it is among them. @returns the path as messages show it. */
export async function saveCounterexample(
  cwd: string,
  spec: Spec,
  added: SavedCounterexample,
): Promise<string> {
  const path = pathOf(cwd, spec);
  const saved = await readSaved(cwd, spec);
  const same = JSON.stringify(added);
  const all = saved.some((one) => JSON.stringify(one) === same) ? saved : [...saved, added];
  await mkdir(dirname(path), { recursive: true });
  await writeFile(path, `${JSON.stringify({ pawl: 1, counterexamples: all }, undefined, 2)}\n`);
  return shownPath(cwd, path);
}
