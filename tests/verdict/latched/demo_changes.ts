import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { readBuild, valuesOf } from '../../../src/cli/read_build.js';
import { vocabulary } from '../../../src/cli/vocabulary.js';
import { openElf } from '../../../src/firmware/elf/elf_file.js';
import { openImage, readCoefficient } from '../../../src/firmware/index.js';
import { formatSpecError, loadSpec } from '../../../src/spec/index.js';
import type { Spec } from '../../../src/spec/spec.js';
import { judgeSpec } from '../../../src/verdict/judge_spec.js';
import { againstReference } from '../../../src/verdict/latched/against_reference.js';
import type { Reference } from '../../../src/verdict/latched/reference.js';
import { referenceOf } from '../../../src/verdict/latched/reference_of.js';
import { referencePlants } from '../../../src/verdict/latched/reference_plants.js';
import type { RequirementRun, SpecRun } from '../../../src/verdict/run.js';

const demo = fileURLToPath(new URL('../../../specs/heliostat/', import.meta.url));
export const shippedImage = join(demo, 'firmware/azimuth.elf');
export const firmwareFolder = join(demo, 'firmware');
const folder = mkdtempSync(join(tmpdir(), 'pawl-latched-'));
/** Judged on this thread alone: so few plants are done before a worker has begun. */
const options = { workers: 1 };

/** The text of the demo spec made quick: two uncertain parameters, short scenarios, no search. */
export function quickText(): string {
  const cut = (text: string, from: string | RegExp, to: string): string => {
    if (text.search(from) < 0) throw new Error(`the demo spec does not contain ${from}`);
    return text.replace(from, to);
  };
  let text = readFileSync(join(demo, 'heliostat.pawl.yaml'), 'utf8');
  text = cut(text, /inertia: .*\n/, 'inertia: { nominal: 38 kg*m^2, spread: 0 % }\n');
  text = cut(text, /stiction: .*\n/, 'stiction: { nominal: 0.6 N*m, spread: 0 % }\n');
  text = cut(text, /drive: {5}.*\n/, 'drive: { nominal: 180 N*m, spread: 0 % }\n');
  text = cut(text, / {2}- \{ name: AZ-2.*\n/, '');
  text = cut(text, / {2}- \{ name: AZ-4.*\n/, '');
  text = cut(text, /^ {2}law: .*\n/m, '');
  text = cut(text, 'lasts: 4 s', 'lasts: 1 s');
  text = cut(text, 'lasts: 4 s', 'lasts: 1.5 s');
  text = cut(text, 'plants: 1000', 'plants: 4\n  search: 0');
  return text;
}

/** The quick spec, perhaps with other text. */
export function quickSpec(change: (text: string) => string = (text) => text): Spec {
  const loaded = loadSpec(change(quickText()), 'specs/heliostat/heliostat.pawl.yaml', vocabulary);
  if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
  return loaded.spec;
}

/** The shipped image with other bytes at coefficients: what a pull request that changes numbers builds. */
export function imageWith(changes: Record<string, (values: DataView, index: number) => void>): string {
  const bytes = Uint8Array.from(readFileSync(shippedImage));
  const image = openImage(bytes, 'azimuth.elf');
  const { sections } = openElf(bytes, 'azimuth.elf');
  for (const [at, change] of Object.entries(changes)) {
    readCoefficient(image, { name: 'c', at }).elements.forEach(({ address }, index) => {
      const section = sections.find(
        (one) => address! >= one.address && address! < one.address + one.size && one.flags & 2,
      )!;
      change(new DataView(bytes.buffer, section.offset + address! - section.address), index);
    });
  }
  const path = join(folder, `${Object.keys(changes).join('-')}-${process.hrtime.bigint()}.elf`);
  writeFileSync(path, bytes);
  return path;
}

/** Sets a float. */
export const float = (value: number) => (at: DataView) => at.setFloat32(0, value, true);

async function judged(spec: Spec, image: string, saved: Float64Array[]) {
  const build = (await readBuild(
    demo,
    { ...spec, file: 'heliostat.pawl.yaml' },
    { image, skipBuild: true },
  ))!;
  const coefficients = valuesOf(build);
  const found = await judgeSpec(spec, coefficients, { ...options, saved });
  const run: SpecRun = {
    ...{
      file: spec.file,
      loop: spec.loop,
      seed: 11,
      confidence: 0.95,
      scenarios: [],
      merge: undefined,
      seconds: 0,
    },
    ...{ provenance: build.provenance, coefficients: build.coefficients },
    ...found,
  };
  return { build, coefficients, found, run };
}

/** What `pawl latch` keeps of the shipped image under a spec. */
export async function latchedReference(spec: Spec): Promise<Reference> {
  const { build, coefficients, run } = await judged(spec, shippedImage, []);
  return referenceOf({ spec, run, coefficients, law: build.law, reason: 'first release', pawl: '0.1.0' });
}

/** The run of a pull request's image under its spec, held against a reference. */
export async function pullRequest(
  spec: Spec,
  image: string,
  reference: Reference | undefined,
  today = '2026-12-01',
): Promise<SpecRun> {
  const saved = referencePlants(reference, spec);
  const { build, coefficients, found, run } = await judged(spec, image, saved);
  const held = await againstReference(
    {
      ...{ spec, judged: found, coefficients, reference, law: build.law, today },
      ...{ path: 'reference/latched/heliostat.json', compilers: build.provenance.compilers },
    },
    { ...options, saved },
  );
  return { ...run, ...held };
}

/** The requirement of a name. */
export function named(run: SpecRun, name: string): RequirementRun {
  return run.requirements.find((one) => one.name === name)!;
}

/** Names of the requirements of each verdict, in the order of the spec. */
export function verdictsOf({ requirements }: SpecRun): Record<string, string> {
  return Object.fromEntries(requirements.map(({ name, verdict }) => [name, verdict.kind]));
}
