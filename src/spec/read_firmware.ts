import { readCoefficient } from './read_coefficient.js';
import { isOriginKey, readNumberOrigin } from './read_number_origin.js';
import type { Reading } from './reading.js';
import type { Firmware, NamedBuild, NumberOrigin } from './spec.js';
import { childOf, entriesOf, entryOf, itemsOf, type MapEntry, type Tree, textOf } from './tree.js';

/** The firmware as a spec judges it: in one build, or in several of which it is the first. */
export interface FirmwareBuilds {
  firmware: Firmware | undefined;
  builds: NamedBuild[] | undefined;
}

/** What all builds have in common. */
type Common = Omit<Firmware, 'numbers'>;

/**
 * `firmware:` the build, where its numbers stand, and the coefficients among them; `builds:` several of them with the same
 * coefficients, each judged by the same spec under its own name. A build without a command of its own has that of `firmware:`.
 */
export function readFirmware(
  entry: MapEntry | undefined,
  buildsEntry: MapEntry | undefined,
  reading: Reading,
): FirmwareBuilds {
  const named = entriesOf(buildsEntry?.value);
  if (entry === undefined || entry.value.kind === 'empty') {
    if (buildsEntry && named.length > 0) {
      reading.problems.add(
        buildsEntry.keyPlace,
        '`builds` needs the section `firmware` with the coefficients that they have in common',
      );
    }
    return { firmware: undefined, builds: undefined };
  }
  const common = readCommon(entry, reading);
  if (named.length === 0) {
    const numbers = readNumberOrigin(entry.value, entry.keyPlace, reading);
    refuseAddresses(common, numbers, reading);
    return { firmware: { ...common, numbers: numbers ?? nowhere(entry) }, builds: undefined };
  }
  refuseOwnOrigin(entry.value, reading);
  const builds = named.map((one) => readBuild(one, common, reading));
  return { firmware: builds[0].firmware, builds };
}

function readCommon({ value, keyPlace: place }: MapEntry, reading: Reading): Common {
  return {
    place,
    build: readBuildCommand(value),
    coefficients: entriesOf(childOf(value, 'coefficients')).map((one) => readCoefficient(one, reading)),
    law: entryOf(value, 'law') && readLaw(childOf(value, 'law'), reading),
  };
}

/** Stands where an origin is missing or wrong and has been reported; a spec with problems is never handed out. */
function nowhere({ keyPlace: place }: MapEntry): NumberOrigin {
  return { kind: 'command', command: [], place };
}

function refuseOwnOrigin(tree: Tree, { problems }: Reading): void {
  for (const { key, keyPlace } of entriesOf(tree).filter(({ key }) => isOriginKey(key)))
    problems.add(keyPlace, `the images stand in \`builds\`; leave \`${key}\` out here`);
}

/** Only what is stored on a target has an address. */
function refuseAddresses(
  { coefficients }: Common,
  origin: NumberOrigin | undefined,
  { problems }: Reading,
): void {
  if (origin === undefined || origin.kind === 'image') return;
  for (const { address, atPlace } of coefficients.filter((one) => one.address !== undefined)) {
    problems.add(
      atPlace,
      `\`0x${address!.toString(16)}\` is an address in an image, but the numbers come from \`${origin.kind}\`; give a name`,
    );
  }
}

function readBuild(entry: MapEntry, common: Common, reading: Reading): NamedBuild {
  const { key: name, keyPlace: place, value } = entry;
  const origin = readNumberOrigin(value, place, reading);
  refuseAddresses(common, origin, reading);
  const numbers = origin ?? nowhere(entry);
  const inherited = numbers.kind === 'command' ? undefined : common.build;
  return { name, place, firmware: { ...common, build: readBuildCommand(value) ?? inherited, numbers } };
}

/** An argument list; undefined where there is none. */
function readBuildCommand(tree: Tree): string[] | undefined {
  return entryOf(tree, 'build') && itemsOf(childOf(tree, 'build')).map((item) => textOf(item)?.text ?? '');
}

/** Names of functions, each once. */
function readLaw(tree: Tree | undefined, reading: Reading): Firmware['law'] {
  const names = itemsOf(tree).flatMap((item) => textOf(item) ?? []);
  names.forEach(({ text, place }, at) => {
    const earlier = names.findIndex((one) => one.text === text);
    if (earlier < at)
      reading.problems.add(place, `the function \`${text}\` is already at line ${names[earlier].place.line}`);
  });
  return names.map(({ text, place }) => ({ name: text, place }));
}
