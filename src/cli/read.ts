import { coefficientTable } from '../report/index.js';
import { type BuildOptions, readBuild } from './read_build.js';
import { readSpec } from './read_spec.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';

/** Prints the coefficients of a spec as the build holds them. */
export async function read(file: string, options: BuildOptions, around: Surroundings): Promise<ExitStatus> {
  const spec = await readSpec(around.cwd, file);
  const build = await readBuild(around.cwd, spec, options);
  if (!build) throw new Fault([`${spec.file}: has no firmware section, so there is nothing to read`]);
  around.print(coefficientTable(build.coefficients));
  return 0;
}
