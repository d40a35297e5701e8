import { checkCycles } from './check_cycles.js';
import { checkSkeleton } from './check_skeleton.js';
import { checkControllersHear, checkUse } from './check_use.js';
import { checkWindows } from './check_windows.js';
import { checkEachBuildJudged } from './for_builds.js';
import { gatherParts, type Includes, joined } from './include.js';
import { newProblems, type Problems } from './problems.js';
import { readFirmware } from './read_firmware.js';
import { declareLoop, readActuators, readControllers, readPlant, readSensors } from './read_loop.js';
import { readConstants, readInputs } from './read_named.js';
import { readParameters } from './read_parameters.js';
import { readRequirements } from './read_requirements.js';
import { checkVersion, readMerge, readPerturbation } from './read_run.js';
import { readScenarios } from './read_scenarios.js';
import { readYaml } from './read_yaml.js';
import type { Reading } from './reading.js';
import { skeletonsOf } from './skeleton.js';
import type { Spec, SpecError } from './spec.js';
import { withTableFiles } from './table_files.js';
import { childOf, entryOf, type MapTree, type Tree, textOf } from './tree.js';
import type { Vocabulary } from './vocabulary.js';

/** A spec, or all its errors: half a spec cannot be used by forgetting to look. */
export type LoadedSpec = { kind: 'spec'; spec: Spec } | { kind: 'errors'; errors: SpecError[] };

/**
 * Reads and checks a spec. Never throws for what stands in the text; every error has its place, sorted by it.
 *
 * @param text the YAML text.
 * @param file its path as errors shall show it.
 * @param vocabulary the blocks and measures that a spec may use.
 * @param includes how the files that it includes are read; without it there are none.
 */
export function loadSpec(
  text: string,
  file: string,
  vocabulary: Vocabulary,
  includes?: Includes,
): LoadedSpec {
  const problems = newProblems();
  const read = rootOf(readYaml(text, file, problems), (place, message) => problems.add(place, message));
  const root = read && withTableFiles(read, { file, includes, problems });
  const spec = root && readWithParts(root, file, { vocabulary, problems, includes });
  const errors = problems.all();
  return spec !== undefined && errors.length === 0 ? { kind: 'spec', spec } : { kind: 'errors', errors };
}

function rootOf(
  tree: Tree | undefined,
  report: (place: SpecError['place'], message: string) => void,
): MapTree | undefined {
  if (tree === undefined || tree.kind === 'map') return tree;
  report(
    tree.place,
    'a spec is a mapping of sections: pawl, loop, firmware, plant, controllers, requirements …',
  );
  return undefined;
}

interface Surroundings {
  vocabulary: Vocabulary;
  problems: Problems;
  includes: Includes | undefined;
}

/** Checks the shape of everything; the readers of the sections then pass over what has the wrong one. */
function readWithParts(
  root: MapTree,
  file: string,
  { vocabulary, problems, includes }: Surroundings,
): Spec | undefined {
  const skeletons = skeletonsOf(vocabulary);
  const before = problems.all().length;
  const parts = gatherParts(root, file, includes, problems).map((part) => ({
    ...part,
    tree: withTableFiles(part.tree, { file, includes, problems }),
  }));
  const gathered = problems.all().length === before;
  const shapes = [
    { tree: root, schema: skeletons.spec },
    ...parts.map(({ tree }) => ({ tree, schema: skeletons.part })),
  ].map(({ tree, schema }) =>
    checkSkeleton(tree, schema, problems, (path, key) => misplaced(path, key, vocabulary)),
  );
  // Without a part every name that it defines would seem to be missing.
  if (!gathered) return undefined;
  const strange = new Set(shapes.flat().map(({ holder }) => holder));
  const incomplete = problems.all().length > 0;
  const names = { entries: new Map(), used: new Set<string>(), incomplete };
  return readSpec(joined(root, parts), file, { vocabulary, problems, strange, names });
}

function readSpec(root: MapTree, file: string, reading: Reading): Spec {
  checkVersion(childOf(root, 'pawl'), reading);
  readConstants(childOf(root, 'constants'), reading);
  const parameters = readParameters(childOf(root, 'parameters'), reading);
  const inputs = readInputs(childOf(root, 'inputs'), reading);
  const { firmware, builds } = readFirmware(entryOf(root, 'firmware'), entryOf(root, 'builds'), reading);
  declareLoop(root, reading);
  const plant = readPlant(childOf(root, 'plant'), reading);
  const sensors = readSensors(childOf(root, 'sensors'), reading);
  const controllers = readControllers(childOf(root, 'controllers'), reading);
  const actuators = readActuators(childOf(root, 'actuators'), reading);
  const scenarios = readScenarios(childOf(root, 'scenarios'), reading);
  const requirements = readRequirements(
    childOf(root, 'requirements'),
    { scenarios, sensors, controllers, actuators, builds },
    reading,
  );
  const perturbation = readPerturbation(childOf(root, 'perturbation'), parameters, reading);
  const merge = readMerge(entryOf(root, 'merge'), requirements, reading);
  const spec: Spec = {
    file,
    loop: textOf(childOf(root, 'loop'))?.text ?? '',
    firmware,
    builds,
    parameters,
    inputs,
    plant,
    sensors,
    controllers,
    actuators,
    scenarios,
    requirements,
    perturbation,
    merge,
  };
  checkWhole(spec, reading);
  return spec;
}

/** What can be judged only when every section is read. */
function checkWhole(spec: Spec, reading: Reading): void {
  checkUse(spec.file, reading);
  checkControllersHear(spec.controllers, reading);
  checkCycles(spec, reading);
  checkWindows(spec.requirements, spec.scenarios, reading);
  checkEachBuildJudged(spec.builds, spec.requirements, reading);
}

/** A block in the wrong room. */
function misplaced(path: readonly PropertyKey[], key: string, vocabulary: Vocabulary): string | undefined {
  const inPlant = path[0] === 'plant' && path.length === 2;
  const inController = path[0] === 'controllers' && path[2] === 'signals' && path.length === 4;
  const block = vocabulary.blocks.find((known) => known.key === key);
  if (block === undefined || !(inPlant || inController)) return undefined;
  const [here, there] = inPlant ? ['the plant', 'a controller'] : ['a controller', 'the plant'];
  return `\`${key}\` cannot be in ${here}: it is a block of ${there}`;
}
