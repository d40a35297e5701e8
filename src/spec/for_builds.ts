import { suggestion } from './nearest.js';
import type { Reading } from './reading.js';
import type { NamedBuild, Requirement, Spec } from './spec.js';
import { itemsOf, type MapEntry, textOf } from './tree.js';

/** `builds:` of a requirement, the builds that it is for; undefined for all of them, or where they are wrong (reported). */
export function readForBuilds(
  entry: MapEntry | undefined,
  builds: readonly NamedBuild[] | undefined,
  { problems }: Reading,
): string[] | undefined {
  if (entry === undefined) return undefined;
  if (builds === undefined) {
    problems.add(
      entry.keyPlace,
      'the spec has one build only; leave `builds` out, or list them in a section `builds`',
    );
    return undefined;
  }
  const known = builds.map(({ name }) => name);
  const written = entry.value.kind === 'list' ? itemsOf(entry.value) : [entry.value];
  const texts = written.flatMap((item) => textOf(item) ?? []);
  const wrong = texts.filter(({ text }) => !known.includes(text));
  for (const { text, place } of wrong)
    problems.add(place, `there is no build \`${text}\`${suggestion(text, known)}`);
  return wrong.length > 0 ? undefined : texts.map(({ text }) => text);
}

/** A build for which no requirement is meant would pass unjudged. */
export function checkEachBuildJudged(
  builds: readonly NamedBuild[] | undefined,
  requirements: readonly Requirement[],
  { problems }: Reading,
): void {
  if (requirements.length === 0) return;
  for (const { name, place } of builds ?? []) {
    if (requirements.some((one) => isFor(one, name))) continue;
    problems.add(
      place,
      `no requirement is for the build \`${name}\`; leave it out, or name it in a requirement's \`builds\``,
    );
  }
}

function isFor({ forBuilds }: Requirement, build: string): boolean {
  return forBuilds === undefined || forBuilds.includes(build);
}

/**
 * The spec as one of its several builds is judged by it: with that build's firmware, and the requirements that are for it.
 * @param name undefined for a spec with one build.
 * @returns undefined where the spec has no such build.
 */
export function specOfBuild(spec: Spec, name: string | undefined): Spec | undefined {
  if (name === undefined) return spec;
  const build = spec.builds?.find((one) => one.name === name);
  return (
    build && {
      ...spec,
      firmware: build.firmware,
      requirements: spec.requirements.filter((one) => isFor(one, name)),
    }
  );
}
