import { readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { vocabulary } from '../../src/cli/vocabulary.js';
import { functionCode, openImage, readCoefficients } from '../../src/firmware/index.js';
import { PlantEvaluator } from '../../src/measure/evaluate_plant.js';
import type { MeasureResult } from '../../src/measure/measure.js';
import { loadSpec, type Requirement, type Spec } from '../../src/spec/index.js';
import { judge } from '../../src/verdict/judge.js';

function specOf(file: string): Spec {
  const loaded = loadSpec(readFileSync(file, 'utf8'), file, vocabulary);
  if (loaded.kind !== 'spec') throw new Error(`${file} has errors`);
  return loaded.spec;
}

/** The least headroom of each requirement over a demo's nominal plant and one far from it, by requirement. */
function headrooms(file: string, image: string, far: Record<string, number>): Record<string, number> {
  const spec = specOf(file);
  const path = join(dirname(file), 'firmware', image);
  const { coefficients } = readCoefficients(openImage(readFileSync(path), path), spec.firmware!.coefficients);
  const numbers = new Map(
    [...coefficients].map(([name, { elements }]) => [name, elements.map(({ value }) => value)]),
  );
  const evaluator = new PlantEvaluator(spec, numbers);
  const nominal = spec.parameters.map((parameter) => parameter.nominal);
  const moved = spec.parameters.map(({ name }, i) => far[name] ?? nominal[i]);
  const results = [nominal, moved].map((plant) => evaluator.evaluate(Float64Array.from(plant), 0));
  return Object.fromEntries(
    spec.requirements.map((requirement, i) => [
      requirement.name,
      Math.min(...results.map((of) => headroomOf(requirement, of[i]))),
    ]),
  );
}

/** Without a number, as of a response that never settles, it is broken beyond measure. */
function headroomOf(requirement: Requirement, result: MeasureResult): number {
  const judgement = judge(requirement, result);
  if (judgement.kind === 'unjudged') throw new Error(`${requirement.name}: ${judgement.why}`);
  return judgement.headroom ?? Number.NEGATIVE_INFINITY;
}

function broken(of: Record<string, number>): string[] {
  return Object.entries(of).flatMap(([name, headroom]) => (headroom < 0 ? [name] : []));
}

// Each far plant has some parameters at those bounds where the broken requirements are hard to meet.
const demos: { spec: string; image: string; far: Record<string, number>; breaks: string[] }[] = [
  {
    spec: 'specs/rootzone-heating/rootzone-heating.pawl.yaml',
    image: 'rootzone',
    far: { loss: 162.5, hot: 21.6 },
    breaks: ['RZ-4'],
  },
  {
    spec: 'specs/grain-conveyor/grain-conveyor.pawl.yaml',
    image: 'conveyor',
    far: { load: 56, stiffness: 84e3, constant: 0.1104 },
    breaks: ['GC-1', 'GC-2'],
  },
];

describe.each(demos)('the demo with $image', ({ spec, image, far, breaks }) => {
  it('meets its requirements with the shipped image, each with headroom', () => {
    const shipped = headrooms(spec, `${image}.elf`, far);
    expect(Object.keys(shipped).length).toBeGreaterThan(10);
    for (const [name, headroom] of Object.entries(shipped)) expect(headroom, name).toBeGreaterThan(0.05);
  });

  it('is caught by the requirements that the slip of the regressed image breaks, and by no others', () => {
    expect(broken(headrooms(spec, `${image}-regressed.elf`, far))).toEqual(breaks);
  });

  it('has images without a path of the machine that built them', () => {
    for (const name of [`${image}.elf`, `${image}-regressed.elf`]) {
      const text = readFileSync(join(dirname(spec), 'firmware', name)).toString('latin1');
      expect(text, name).not.toContain(process.cwd());
      expect(text, name).not.toMatch(/\/(root|work|tmp|Users)\//);
    }
  });
});

describe.each([
  ['heliostat', 'azimuth'],
  ['rootzone-heating', 'rootzone'],
  ['grain-conveyor', 'conveyor'],
])('the law of %s', (name, file) => {
  const source = `specs/${name}/firmware/${file}`;

  it('is the latched one in both images in git: only numbers differ between them', () => {
    const spec = specOf(`specs/${name}/${name}.pawl.yaml`);
    const { law } = JSON.parse(readFileSync(`reference/latched/${name}.json`, 'utf8'));
    const named = spec.firmware!.law!.map((one) => one.name);
    expect(Object.keys(law)).toEqual([...named].sort());
    for (const image of [`${source}.elf`, `${source}-regressed.elf`]) {
      const opened = openImage(readFileSync(image), image);
      for (const one of named) {
        const { size, digest } = functionCode(opened, one);
        expect({ size, digest }).toEqual(law[one]);
      }
    }
  });

  it('names every function that its functions call', () => {
    const spec = specOf(`specs/${name}/${name}.pawl.yaml`);
    const named = spec.firmware!.law!.map((one) => one.name);
    // Functions of the same source that are called by another one, but for those that the compiler put into their callers.
    const opened = openImage(readFileSync(`${source}.elf`), 'image');
    const text = readFileSync(`${source}.c`, 'utf8');
    const defined = [...text.matchAll(/^(?:static )?\w+ (\w+)\([^;]*\)\n\{/gm)].map(([, found]) => found);
    expect(defined.length).toBeGreaterThanOrEqual(named.length);
    const kept = defined.filter((one) => {
      try {
        return functionCode(opened, one).size > 0;
      } catch {
        return false;
      }
    });
    expect(kept.sort()).toEqual([...named].sort());
  });
});
