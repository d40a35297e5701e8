import { posix } from 'node:path';
import type { Cursor } from '../cursor.js';
import { numberAttribute, textAttribute, textOf } from './attributes.js';
import { at } from './codes.js';
import { readInitialLength, type Unit } from './debug_information.js';
import { rootOf } from './entry.js';
import { fixedSize, readAttribute } from './forms.js';

interface FileNames {
  folders: string[];
  files: { name: string; folder: number }[];
}

const contentPath = 1;
const contentFolder = 2;
const kept = new WeakMap<Unit, FileNames>();

/**
 * The name of a source file by its number in the unit's line table, below the folder that it was compiled in where it lies
 * there; undefined when the table has no such file.
 */
export function fileName(unit: Unit, index: number): string | undefined {
  let names = kept.get(unit);
  if (!names) {
    names = readNames(unit);
    kept.set(unit, names);
  }
  const file = names.files[index];
  if (!file) return undefined;
  const root = rootOf(unit);
  const compiledIn = (root && textAttribute(root, at.compilationFolder)) ?? '';
  const folder = file.folder === 0 && unit.version < 5 ? '' : (names.folders[file.folder] ?? '');
  return below(compiledIn, joined(folder, file.name));
}

function joined(folder: string, name: string): string {
  return folder === '' || isAbsolute(name) ? name : `${folder}/${name}`;
}

function isAbsolute(path: string): boolean {
  return path.startsWith('/') || /^[A-Za-z]:[\\/]/.test(path);
}

/** A file beside the folder is written from there too, so that it reads the same on every machine. */
function below(folder: string, path: string): string {
  if (!folder.startsWith('/') || !path.startsWith('/')) return path.replace(/^(\.\/)+/, '');
  const inside = posix.relative(folder, path);
  return inside.startsWith('../'.repeat(farthestFolders + 1)) ? path : inside;
}

/** A path that goes up further than this is rather written in full. */
const farthestFolders = 3;

function readNames(unit: Unit): FileNames {
  const root = rootOf(unit);
  const offset = root && numberAttribute(root, at.statementList);
  if (offset === undefined) return { folders: [], files: [] };
  const cursor = unit.debug.cursor('.debug_line', offset);
  const { offsetSize } = readInitialLength(cursor);
  const version = cursor.u16();
  if (version < 2 || version > 5)
    throw cursor.failure(`line table version ${version}, versions 2 to 5 can be read`);
  if (version >= 5) cursor.skip(2);
  cursor.skip(offsetSize);
  cursor.skip(version >= 4 ? 5 : 4);
  const operations = cursor.u8();
  cursor.skip(Math.max(0, operations - 1));
  return version >= 5 ? readNames5(unit, cursor, offsetSize) : readNames2(cursor);
}

/** Versions 2 to 4: texts up to an empty one; file numbers begin at 1. */
function readNames2(cursor: Cursor): FileNames {
  const folders = [''];
  for (let name = cursor.text(); name !== ''; name = cursor.text()) folders.push(name);
  const files: FileNames['files'] = [{ name: '', folder: 0 }];
  for (let name = cursor.text(); name !== ''; name = cursor.text()) {
    files.push({ name, folder: cursor.uleb() });
    cursor.skipLeb();
    cursor.skipLeb();
  }
  return { folders, files };
}

/** Version 5: tables which state their own columns; numbers begin at 0. */
function readNames5(unit: Unit, cursor: Cursor, offsetSize: 4 | 8): FileNames {
  const folders = readRows(unit, cursor, offsetSize).map((row) => row.name);
  return { folders, files: readRows(unit, cursor, offsetSize) };
}

function readRows(unit: Unit, cursor: Cursor, offsetSize: 4 | 8): FileNames['files'] {
  const sizes = { ...unit, offsetSize };
  const columns = Array.from({ length: cursor.u8() }, () => {
    const [name, form] = [cursor.uleb(), cursor.uleb()];
    return { name, form, implicit: 0n, size: fixedSize(form, sizes) };
  });
  const count = cursor.uleb();
  if (columns.length === 0 || count > cursor.end - cursor.position) {
    if (count === 0) return [];
    throw cursor.failure(`a table of ${count} names with ${columns.length} columns`);
  }
  return Array.from({ length: count }, () => {
    const row = { name: '', folder: 0 };
    for (const column of columns) {
      const { name, form, value } = readAttribute(cursor, column, sizes);
      if (name === contentPath) row.name = textOf(unit, form, value) ?? '';
      else if (name === contentFolder) row.folder = Number(value);
    }
    return row;
  });
}
