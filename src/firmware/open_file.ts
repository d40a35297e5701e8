import { readFile } from 'node:fs/promises';
import { basename, dirname, join } from 'node:path';
import { sectionNamed } from './elf/contents.js';
import { crc32, type DebugLink, debugLinkOf } from './elf/debug_link.js';
import { buildIdOf } from './elf/identity.js';
import { FirmwareError, quoted } from './failure.js';
import { type ElfImage, type FirmwareImage, type OpenOptions, openImage } from './image.js';

/** How to open a file: what its bytes do not say, and where else to look. */
export interface FileOptions extends Omit<OpenOptions, 'symbols' | 'debugFile'> {
  /** What messages call it; its path by default. */
  name?: string;
  /** Path of the ELF file of the same build, for images without names. */
  symbols?: string;
  /** Path of the file with the debug information, where neither build id nor debug link lead to it. */
  debugFile?: string;
  /** Folders with debug files, besides the image's own, its `.debug`, and `/usr/lib/debug`. */
  debugFolders?: readonly string[];
}

/**
 * Opens an image file, with the debug information that was split off from it if it can be found by build id or debug link.
 * @throws FirmwareError `image_missing` where there is no file, `sources_disagree` for a debug file of another build
 */
export async function openImageFile(path: string, options: FileOptions = {}): Promise<FirmwareImage> {
  const name = options.name ?? path;
  const bytes = await readImage(path, name);
  const symbols =
    options.symbols === undefined
      ? undefined
      : await openImageFile(options.symbols, { debugFolders: options.debugFolders });
  const opened = openImage(bytes, name, { ...options, symbols, debugFile: undefined });
  if (opened.kind !== 'elf') return opened;
  const debugFile = await findDebugFile(opened, path, options);
  return debugFile ? openImage(bytes, name, { debugFile }) : opened;
}

async function readImage(path: string, name: string): Promise<Uint8Array> {
  try {
    return await readFile(path);
  } catch (cause) {
    const { code } = cause as NodeJS.ErrnoException;
    const why =
      code === 'ENOENT'
        ? 'there is no such file; build it first, or correct the path'
        : `it cannot be read (${code})`;
    throw new FirmwareError('image_missing', `image ${quoted(name)}: ${why}`);
  }
}

async function findDebugFile(
  image: ElfImage,
  path: string,
  options: FileOptions,
): Promise<FirmwareImage | undefined> {
  if (options.debugFile !== undefined) {
    const given = openImage(await readImage(options.debugFile, options.debugFile), options.debugFile);
    checkSameBuild(image, given);
    return given;
  }
  if (image.debug.present) return undefined;
  const folder = dirname(path);
  const folders = [folder, join(folder, '.debug'), ...(options.debugFolders ?? []), '/usr/lib/debug'];
  const id = buildIdOf(image.elf);
  const byId =
    id === undefined || id.length < 6 ? [] : [join('.build-id', id.slice(0, 2), `${id.slice(2)}.debug`)];
  const link = debugLinkOf(image.elf);
  const byLink = link && link.fileName !== '' ? [basename(link.fileName)] : [];
  for (const candidate of folders.flatMap((start) => [...byId, ...byLink].map((file) => join(start, file)))) {
    const found = await tryDebugFile(candidate, path, link);
    if (!found) continue;
    checkSameBuild(image, found);
    return found;
  }
  return undefined;
}

async function tryDebugFile(
  path: string,
  imagePath: string,
  link: DebugLink | undefined,
): Promise<FirmwareImage | undefined> {
  if (path === imagePath) return undefined;
  const bytes = await readFile(path).catch(() => undefined);
  if (!bytes) return undefined;
  const isLinked = link !== undefined && basename(path) === basename(link.fileName);
  if (isLinked && crc32(bytes) !== link.checksum) {
    throw new FirmwareError(
      'sources_disagree',
      `the debug file ${quoted(basename(path))} is not the one that was split off from ${quoted(imagePath)}: its CRC-32 differs; rebuild both`,
    );
  }
  return openImage(bytes, basename(path));
}

function checkSameBuild(image: ElfImage, debugFile: FirmwareImage): void {
  if (debugFile.kind !== 'elf')
    throw new FirmwareError('not_an_image', `the debug file ${quoted(debugFile.name)} is not an ELF file`);
  const [id, other] = [buildIdOf(image.elf), buildIdOf(debugFile.elf)];
  const differs = id !== undefined && other !== undefined && id !== other;
  if (differs || debugFile.elf.machine !== image.elf.machine) {
    throw new FirmwareError(
      'sources_disagree',
      `the debug file ${quoted(debugFile.name)} (build id ${other ?? 'none'}) does not belong to ${quoted(image.name)} (build id ${id ?? 'none'})`,
    );
  }
  if (!sectionNamed(debugFile.elf, '.debug_info')) {
    throw new FirmwareError(
      'no_debug_information',
      `the debug file ${quoted(debugFile.name)} has no debug information`,
    );
  }
}
