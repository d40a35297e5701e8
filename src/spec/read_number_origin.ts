import { suggestion } from './nearest.js';
import { readAddress } from './read_address.js';
import type { Reading } from './reading.js';
import type { Located, NumberOrigin, Place } from './spec.js';
import {
  childOf,
  entriesOf,
  entryOf,
  itemsOf,
  type MapEntry,
  type TextTree,
  type Tree,
  textOf,
} from './tree.js';

/** The keys of which one says where the numbers of a build stand. */
const originKeys = ['image', 'source', 'command'];
/** Keys that explain an image. */
const imageKeys = ['base_address', 'byte_order', 'symbols', 'debug_file'];

/** Whether a key says where numbers stand, or explains that. */
export function isOriginKey(key: string): boolean {
  return [...originKeys, ...imageKeys].includes(key);
}

/**
 * Where the numbers of one build stand: an `image:`, or nothing but its path; a C `source:`; or a `command:` that prints
 * them. Of these there is one; what is missing, or does not go together, is reported.
 * @param place where an origin that is missing is reported.
 */
export function readNumberOrigin(tree: Tree, place: Place, reading: Reading): NumberOrigin | undefined {
  const path = textOf(tree);
  if (path) return imageAt(path);
  const [first, ...others] = entriesOf(tree).filter(({ key }) => originKeys.includes(key));
  if (first === undefined) {
    if (!reading.strange.has(tree) && tree.kind === 'map') reading.problems.add(place, missingOrigin);
    return undefined;
  }
  for (const other of others) {
    reading.problems.add(
      other.keyPlace,
      `\`${other.key}\` cannot stand beside \`${first.key}\`: the numbers of a build come from one of them`,
    );
  }
  if (first.key === 'image') return readImage(tree, first, reading);
  for (const { key, keyPlace } of entriesOf(tree).filter((entry) => imageKeys.includes(entry.key))) {
    reading.problems.add(
      keyPlace,
      `\`${key}\` belongs to \`image\`, but the numbers come from \`${first.key}\``,
    );
  }
  return first.key === 'source' ? readSource(first, reading) : readCommand(tree, first, reading);
}

const missingOrigin =
  '`image` is missing; expected the path of the image, relative to this file, or else `source` or `command`';

function readImage(tree: Tree, { value }: MapEntry, reading: Reading): NumberOrigin | undefined {
  const image = textOf(value);
  if (image === undefined) return undefined;
  return {
    ...imageAt(image),
    baseAddress: readAddress(childOf(tree, 'base_address'), '`base_address`', reading),
    byteOrder: readByteOrder(tree, reading),
    symbols: locatedText(childOf(tree, 'symbols')),
    debugFile: locatedText(childOf(tree, 'debug_file')),
  };
}

function imageAt({ text: path, place }: TextTree): NumberOrigin & { kind: 'image' } {
  const nothing = { baseAddress: undefined, byteOrder: undefined, symbols: undefined, debugFile: undefined };
  return { kind: 'image', path, place, ...nothing };
}

function readByteOrder(tree: Tree, reading: Reading): Located<'little' | 'big'> | undefined {
  const entry = entryOf(tree, 'byte_order');
  const written = locatedText(entry?.value);
  if (!entry || !written) return undefined;
  const { value, place } = written;
  if (value !== 'little' && value !== 'big') {
    const near = suggestion(value, ['little', 'big']);
    reading.problems.add(place, `\`byte_order\` must be little or big, but is \`${value}\`${near}`);
    return undefined;
  }
  if (childOf(tree, 'symbols')) {
    reading.problems.add(
      entry.keyPlace,
      '`byte_order` cannot stand beside `symbols`: that file states the order',
    );
  }
  return { value, place };
}

function readSource({ value }: MapEntry, reading: Reading): NumberOrigin | undefined {
  const file = textOf(childOf(value, 'file'));
  if (file === undefined) return undefined;
  const compiler = childOf(value, 'compiler');
  return {
    kind: 'source',
    path: file.text,
    place: file.place,
    includePaths: textsOf(childOf(value, 'include_paths')),
    defines: entriesOf(childOf(value, 'defines')).map((entry) => readDefine(entry, reading)),
    compiler: compiler && (compiler.kind === 'list' ? textsOf(compiler) : [textOf(compiler)?.text ?? '']),
  };
}

function readDefine({ key, keyPlace, value }: MapEntry, reading: Reading): string {
  if (!/^[A-Za-z_]\w*$/.test(key)) {
    reading.problems.add(
      keyPlace,
      `\`${key}\` cannot be defined; expected the name of a macro, such as BOARD_B`,
    );
  }
  return `${key}=${textOf(value)?.text ?? ''}`;
}

function readCommand(tree: Tree, { value, keyPlace }: MapEntry, reading: Reading): NumberOrigin {
  const build = entryOf(tree, 'build');
  if (build) {
    reading.problems.add(
      build.keyPlace,
      '`build` cannot stand beside `command`, which makes no file; let the command itself run the build',
    );
  }
  return { kind: 'command', command: textsOf(value), place: keyPlace };
}

function textsOf(tree: Tree | undefined): string[] {
  return itemsOf(tree).map((item) => textOf(item)?.text ?? '');
}

function locatedText(tree: Tree | undefined): Located<string> | undefined {
  const text = textOf(tree);
  return text && { value: text.text, place: text.place };
}
