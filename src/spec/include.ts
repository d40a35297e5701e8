import { posix } from 'node:path';
import type { Problems } from './problems.js';
import { readYaml } from './read_yaml.js';
import { childOf, entriesOf, itemsOf, type MapTree, type TextTree, textOf } from './tree.js';

/** How included files are read. Paths have the form of the spec's own path and are normalised. */
export interface Includes {
  /** The text of a file, or undefined where there is none. */
  read: (path: string) => string | undefined;
  /** The folder that no path may leave; the spec's own folder where it is not given. */
  within?: string;
}

/** A file that a spec includes, directly or through another one. */
export interface Part {
  file: string;
  tree: MapTree;
}

const mostParts = 50;

interface Gathering {
  includes: Includes | undefined;
  within: string;
  problems: Problems;
  parts: Part[];
}

/**
 * Reads the files that a spec includes, each once, in the order in which their definitions count: what a part includes
 * comes before it. Cycles and paths that leave the folder are reported.
 */
export function gatherParts(
  root: MapTree,
  file: string,
  includes: Includes | undefined,
  problems: Problems,
): Part[] {
  const within = topFolder(file, includes);
  const gathering: Gathering = { includes, within, problems, parts: [] };
  gather({ file, tree: root }, [file], gathering);
  return gathering.parts;
}

/** The spec with the entries of its parts before its own. */
export function joined(root: MapTree, parts: readonly Part[]): MapTree {
  if (parts.length === 0) return root;
  const all = [...parts.map((part) => part.tree), root];
  const keys = new Set(all.flatMap((tree) => tree.entries.map(({ key }) => key)));
  const entries = [...keys].map((key) => {
    const own = all.flatMap((tree) => tree.entries.filter((entry) => entry.key === key));
    const maps = own.filter(({ value }) => value.kind === 'map');
    const last = own.at(-1)!;
    if (maps.length < 2) return maps[0] ?? last;
    const merged: MapTree = {
      kind: 'map',
      place: last.value.place,
      entries: maps.flatMap(({ value }) => entriesOf(value)),
    };
    return { ...last, value: merged };
  });
  return { ...root, entries };
}

function gather(from: Part, path: string[], gathering: Gathering): void {
  for (const item of itemsOf(childOf(from.tree, 'include'))) {
    const text = textOf(item);
    const part = text && readPart(text, from.file, path, gathering);
    if (part === undefined) continue;
    gather(part, [...path, part.file], gathering);
    gathering.parts.push(part);
  }
}

function readPart(text: TextTree, from: string, path: string[], gathering: Gathering): Part | undefined {
  const { problems, parts, includes } = gathering;
  const refuse = (message: string) => {
    problems.add(text.place, message);
    return undefined;
  };
  const file = posix.normalize(posix.join(posix.dirname(from), text.text));
  if (!isInside(text.text, file, gathering.within)) {
    return refuse(
      `\`${text.text}\` leads outside \`${gathering.within}\`; an included file lies in that folder`,
    );
  }
  if (path.includes(file)) {
    return refuse(
      `\`${text.text}\` is included in a cycle: ${[...path.slice(path.indexOf(file)), file].join(' → ')}`,
    );
  }
  if (parts.some((part) => part.file === file)) return undefined;
  if (parts.length + path.length > mostParts) return refuse(`more than ${mostParts} files are included`);
  const content = includes?.read(file);
  if (content === undefined) return refuse(`\`${text.text}\` cannot be read: there is no file \`${file}\``);
  const tree = readYaml(content, file, problems);
  if (tree?.kind === 'map') return { file, tree };
  if (tree !== undefined)
    problems.add(tree.place, 'an included file is a mapping of sections, such as parameters and plant');
  return undefined;
}

/** The folder that no path of a spec may leave. */
export function topFolder(file: string, includes: Includes | undefined): string {
  return posix.normalize(includes?.within ?? posix.dirname(file));
}

/** Paths are relative and written with /, so that they mean the same on every machine. */
export function isInside(written: string, file: string, within: string): boolean {
  if (written.includes('\\') || /^[A-Za-z]:/.test(written) || posix.isAbsolute(written)) return false;
  const way = posix.relative(within, file);
  return way !== '' && way !== '..' && !way.startsWith('../');
}
