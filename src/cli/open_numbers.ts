import { open } from 'node:fs/promises';
import { isAbsolute, relative, resolve } from 'node:path';
import {
  FirmwareError,
  type FirmwareImage,
  openCommand,
  openImage,
  openImageFile,
  openSource,
  type ValuesImage,
} from '../firmware/index.js';
import { formatSpecError } from '../spec/index.js';
import type { NumberOrigin, Place } from '../spec/spec.js';
import { shownPath } from './read_spec.js';
import { Fault } from './surroundings.js';

/** Folders that paths are seen from. */
export interface Folders {
  /** The working folder, from which paths are shown. */
  cwd: string;
  /** The spec's, in which its paths lie. */
  folder: string;
}

/** Where numbers stand, as the spec says it or with another file in the place of the spec's. */
export type ChosenOrigin = NumberOrigin & { replaced: boolean };

type ImageOrigin = ChosenOrigin & { kind: 'image' };
type SourceOrigin = ChosenOrigin & { kind: 'source' };

/**
 * Opens what holds the numbers of a build.
 * @param interrupted aborted when the user ends the work; ends programs that are run for it.
 * @throws {Fault} at the place in the spec that names it.
 */
export async function openNumbers(
  origin: ChosenOrigin,
  folders: Folders,
  interrupted?: AbortSignal,
): Promise<FirmwareImage> {
  switch (origin.kind) {
    case 'image':
      return openImageOf(origin, folders);
    case 'source':
      return openSourceOf(origin, folders, interrupted);
    case 'command':
      return placed(origin.place, folders, () =>
        openCommand({ command: origin.command, cwd: folders.folder, interrupted }),
      );
  }
}

/** What a failing build or image says, at its place in the spec where it has one; any other error as it is. */
export function asFault(error: unknown, place: Place | undefined, { cwd, folder }: Folders): unknown {
  if (!(error instanceof FirmwareError)) return error;
  // What a compiler says may name its files in full; messages name no folder of one machine.
  const message = error.message.replaceAll(`${folder}/`, '').replaceAll(`${cwd}/`, '');
  return new Fault([place ? formatSpecError({ place, message }) : message]);
}

async function placed<T>(place: Place | undefined, folders: Folders, work: () => Promise<T>): Promise<T> {
  try {
    return await work();
  } catch (error) {
    throw asFault(error, place, folders);
  }
}

/** An ELF file says itself what the keys beside `image` say of other files: there they would be passed over. */
async function openImageOf(origin: ImageOrigin, folders: Folders): Promise<FirmwareImage> {
  const { baseAddress, byteOrder, symbols, debugFile, replaced } = origin;
  const place = replaced ? undefined : origin.place;
  const path = resolve(folders.folder, origin.path);
  const name = shownPath(folders.cwd, path);
  const isElf = await beginsLikeElf(path);
  if (!replaced) refuseMisfits(origin, isElf, name);
  if (isElf) {
    const debugPath = debugFile && resolve(folders.folder, debugFile.value);
    return placed(place, folders, () => openImageFile(path, { name, debugFile: debugPath }));
  }
  const options = { baseAddress: baseAddress?.value, byteOrder: byteOrder?.value };
  const image = await placed(place, folders, () => openImageFile(path, { name, ...options }));
  if (!symbols) return image;
  const symbolsPath = resolve(folders.folder, symbols.value);
  return placed(symbols.place, folders, async () => {
    const named = await openImageFile(symbolsPath, { name: shownPath(folders.cwd, symbolsPath) });
    return openImage(image.bytes, name, { ...options, symbols: named });
  });
}

function refuseMisfits(
  { baseAddress, byteOrder, symbols, debugFile }: ImageOrigin,
  isElf: boolean,
  name: string,
) {
  const [misfit] = isElf
    ? [
        baseAddress && { key: 'base_address', place: baseAddress.place },
        byteOrder && { key: 'byte_order', place: byteOrder.place },
        symbols && { key: 'symbols', place: symbols.place },
      ].filter((one) => one !== undefined)
    : [debugFile && { key: 'debug_file', place: debugFile.place }].filter((one) => one !== undefined);
  if (!misfit) return;
  const message = isElf
    ? `\`${misfit.key}\` is for images without names, but '${name}' is an ELF file; leave it out`
    : `\`${misfit.key}\` is for ELF files, but '${name}' is none; give the ELF file of the same build as \`symbols\``;
  throw new Fault([formatSpecError({ place: misfit.place, message })]);
}

async function beginsLikeElf(path: string): Promise<boolean> {
  try {
    await using file = await open(path);
    const { buffer, bytesRead } = await file.read(Buffer.alloc(4), 0, 4, 0);
    return bytesRead === 4 && buffer.toString('latin1') === '\x7fELF';
  } catch {
    // Whoever opens it in full says why it cannot be read.
    return false;
  }
}

async function openSourceOf(
  origin: SourceOrigin,
  folders: Folders,
  interrupted: AbortSignal | undefined,
): Promise<ValuesImage> {
  const place = origin.replaced ? undefined : origin.place;
  const path = resolve(folders.folder, origin.path);
  const name = shownPath(folders.cwd, path);
  const { includePaths, defines, compiler } = origin;
  const image = await placed(place, folders, async () => {
    await mustExist(path, name);
    return openSource({
      path: origin.path,
      cwd: folders.folder,
      includePaths,
      defines,
      compiler,
      interrupted,
    });
  });
  return { ...image, name, values: withRelativePlaces(image.values, folders.folder) };
}

async function mustExist(path: string, name: string): Promise<void> {
  try {
    await (await open(path)).close();
  } catch {
    throw new FirmwareError('image_missing', `there is no source '${name}' that could be read`);
  }
}

function withRelativePlaces(values: ValuesImage['values'], folder: string): ValuesImage['values'] {
  return new Map(
    [...values].map(([name, { node, declaredAt }]) => {
      const at =
        declaredAt && isAbsolute(declaredAt.file)
          ? { ...declaredAt, file: relative(folder, declaredAt.file).replaceAll('\\', '/') }
          : declaredAt;
      return [name, { node, declaredAt: at }];
    }),
  );
}
