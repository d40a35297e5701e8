import { resolve } from 'node:path';
import { beforeAll, describe, it } from 'vitest';
import { check } from './check.js';
import { readSpec } from './cli/read_spec.js';
import { findingOnOneLine } from './report/requirement_in_words.js';
import { specOfBuild } from './spec/for_builds.js';
import { letsMergeThrough, type RequirementRun, type SpecRun } from './verdict/run.js';

/** How requirements are tested. */
export interface RequirementTestOptions {
  /** Where paths begin; the working folder where it is not given. */
  folder?: string;
  /** Another image than the one that the spec names, relative to `folder`. */
  image?: string;
  /** Takes the image as it is, without running the spec's build command. */
  skipBuild?: boolean;
  /** ms that judging may take; ten minutes where it is not given. */
  timeout?: number;
}

const usualTimeout = 600_000;

/**
 * Makes each requirement of a spec a test of vitest. The spec is judged once, before the first of them; a spec or a build
 * that cannot be run fails all of them.
 *
 *     import { testRequirements } from 'pawl/vitest';
 *     testRequirements('drive.pawl.yaml');
 */
export function testRequirements(specFile: string, options: RequirementTestOptions = {}): void {
  const { folder = '.', image, skipBuild, timeout = usualTimeout } = options;
  describe(specFile, async () => {
    const spec = await readSpec(resolve(folder), specFile);
    let judged: SpecRun[] = [];
    beforeAll(async () => {
      const { run, faults } = await check({ specs: [specFile], folder, image, skipBuild });
      if (faults.length > 0) throw new Error(faults.flatMap(({ messages }) => messages).join('\n'));
      judged = run.specs;
    }, timeout);
    for (const [at, build] of (spec.builds ?? [undefined]).entries()) {
      for (const { name, measure } of specOfBuild(spec, build?.name)!.requirements) {
        const title = build === undefined ? `${name} ${measure}` : `${build.name}: ${name} ${measure}`;
        it(title, () => {
          mustHold(judged[at].requirements.find((one) => one.name === name)!, resolve(folder));
        });
      }
    }
  });
}

/** @throws Error with the finding, and the requirement's line in the spec where others have a trace. */
function mustHold(requirement: RequirementRun, folder: string): void {
  if (letsMergeThrough(requirement)) return;
  const { file, line, column } = requirement.place;
  const error = new Error(findingOnOneLine(requirement));
  error.name = requirement.verdict.kind;
  error.stack = `${error.name}: ${error.message}\n    at ${requirement.name} (${resolve(folder, file)}:${line}:${column})`;
  throw error;
}
