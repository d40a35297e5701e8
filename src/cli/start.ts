import { access, writeFile } from 'node:fs/promises';
import { basename, relative, resolve } from 'node:path';
import { type Candidate, candidates } from '../firmware/index.js';
import { formatSpecError, loadSpec } from '../spec/index.js';
import { firstSpec } from './first_spec.js';
import { faultOf, openNamedImage } from './open_image.js';
import { type ExitStatus, Fault, type Surroundings } from './surroundings.js';
import { vocabulary } from './vocabulary.js';

/**
 * Writes a first spec for an image into the working folder, which loads and runs as it is.
 * @throws {Fault} when the image holds no numbers, or a spec of that name is there already.
 */
export async function start(imagePath: string, around: Surroundings): Promise<ExitStatus> {
  const image = await openNamedImage(around.cwd, imagePath);
  const found = foundIn(() => candidates(image));
  const name = basename(imagePath).replace(/\.[^.]*$/, '') || 'loop';
  const file = `${name}.pawl.yaml`;
  const shownImage = relative(around.cwd, resolve(around.cwd, imagePath)).replaceAll('\\', '/');
  const text = firstSpec(name, shownImage, found);
  if (text === undefined)
    throw new Fault([
      `'${imagePath}' holds no number, other than zero, that could be a coefficient of a controller`,
    ]);
  mustLoad(text, file);
  await writeNew(resolve(around.cwd, file), file, text);
  around.print(`${file} is written; 'pawl check ${file}' runs it. Put your plant and your limits in it.\n`);
  return 0;
}

function foundIn(list: () => Candidate[]): Candidate[] {
  try {
    return list();
  } catch (error) {
    throw faultOf(error);
  }
}

/** A spec of ours that does not load is a bug of ours. */
function mustLoad(text: string, file: string): void {
  const loaded = loadSpec(text, file, vocabulary);
  if (loaded.kind === 'errors') throw new Error(loaded.errors.map(formatSpecError).join('\n'));
}

async function writeNew(path: string, shown: string, text: string): Promise<void> {
  const exists = await access(path).then(
    () => true,
    () => false,
  );
  if (exists) throw new Fault([`${shown} is there already; move it away, or go on with it`]);
  await writeFile(path, text);
}
