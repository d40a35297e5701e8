import { join } from 'node:path';
import { fixtures, run } from './toolchain.js';

/** One image of the matrix: how it is built from which source. */
export interface Build {
  name: string;
  source: 'gains.c' | 'filters.cpp';
  /** Commands that make the image `$out`; `$object` is a place for what lies between. */
  commands: string[][];
}

const cortex = ['-mcpu=cortex-m4', '-mthumb', '-ffreestanding'];

function gcc(source: Build['source'], ...flags: string[]): Build {
  const program = source === 'gains.c' ? 'arm-none-eabi-gcc' : 'arm-none-eabi-g++';
  const name = `${program} ${source} ${flags.join(' ')}`;
  return { name, source, commands: [[program, ...cortex, '-nostdlib', ...flags, '-o', '$out', source]] };
}

function bigEndian(...flags: string[]): Build {
  const name = `arm-none-eabi-gcc big-endian ${flags.join(' ')}`;
  return {
    name,
    source: 'gains.c',
    commands: [
      ['arm-none-eabi-gcc', '-mbig-endian', '-ffreestanding', '-nostdlib', ...flags, '-o', '$out', 'gains.c'],
    ],
  };
}

function clang(source: Build['source'], target: string, ...flags: string[]): Build {
  return {
    name: `clang ${source} ${target} ${flags.join(' ')}`,
    source,
    commands: [
      ['clang', `--target=${target}`, '-ffreestanding', ...flags, '-c', '-o', '$object', source],
      ['ld.lld', '-e', '_start', '-o', '$out', '$object'],
    ],
  };
}

function clangObject(target: string, ...flags: string[]): Build {
  return {
    name: `clang unlinked ${target} ${flags.join(' ')}`,
    source: 'gains.c',
    commands: [['clang', `--target=${target}`, '-ffreestanding', ...flags, '-c', '-o', '$out', 'gains.c']],
  };
}

const levels = ['-O0', '-O2', '-Os'];
const versions = ['-gdwarf-2', '-gdwarf-3', '-gdwarf-4', '-gdwarf-5'];
const dropping = ['-ffunction-sections', '-fdata-sections'];

/** Every image of the matrix that carries debug information. */
export const builds: Build[] = [
  ...levels.flatMap((level) => versions.map((version) => gcc('gains.c', level, version))),
  gcc('gains.c', '-O2', '-g', '-gz=zlib'),
  gcc('gains.c', '-O2', '-g', '-gz=zlib-gnu'),
  gcc('gains.c', '-O2', '-g', '-flto'),
  gcc('gains.c', '-Os', '-g', ...dropping, '-Wl,--gc-sections'),
  gcc('gains.c', '-O1', '-gdwarf-4', '-fdebug-types-section'),
  gcc('gains.c', '-O1', '-gdwarf-5', '-fdebug-types-section'),
  gcc('gains.c', '-O1', '-gdwarf-5', '-gdwarf64'),
  gcc('gains.c', '-O1', '-gdwarf-4', '-fno-merge-debug-strings'),
  gcc('gains.c', '-O1', '-g', '-c'),
  gcc('filters.cpp', '-O0', '-gdwarf-4'),
  gcc('filters.cpp', '-O2', '-gdwarf-5'),
  gcc('filters.cpp', '-Os', '-gdwarf-3'),
  gcc('filters.cpp', '-O1', '-gdwarf-2'),
  gcc('filters.cpp', '-O1', '-gdwarf-4', '-fdebug-types-section'),
  bigEndian('-O0', '-gdwarf-5'),
  bigEndian('-O2', '-gdwarf-4'),
  bigEndian('-Os', '-gdwarf-2'),
  clang('gains.c', 'arm-none-eabi', '-mcpu=cortex-m4', '-O2', '-gdwarf-5'),
  clang('gains.c', 'arm-none-eabi', '-mcpu=cortex-m4', '-Os', '-gdwarf-3'),
  clang('gains.c', 'riscv32-unknown-elf', '-O0', '-gdwarf-4'),
  clang('gains.c', 'riscv32-unknown-elf', '-O2', '-gdwarf-5'),
  clang('gains.c', 'riscv64-unknown-elf', '-Os', '-gdwarf-5'),
  clang('gains.c', 'aarch64-none-elf', '-O0', '-gdwarf-5'),
  clang('gains.c', 'aarch64-none-elf', '-O2', '-gdwarf-2'),
  clang('gains.c', 'aarch64_be-none-elf', '-O2', '-gdwarf-4'),
  clang('gains.c', 'x86_64-none-elf', '-O0', '-gdwarf-3'),
  clang('gains.c', 'x86_64-none-elf', '-O2', '-gdwarf-5', '-gz=zlib'),
  clang('gains.c', 'x86_64-none-elf', '-O2', '-gdwarf-5', '-flto'),
  clang('gains.c', 'x86_64-none-elf', '-Os', '-gdwarf-4', '-fdebug-types-section'),
  clang('gains.c', 'i386-none-elf', '-O2', '-gdwarf-5'),
  clang('gains.c', 'powerpc-none-eabi', '-O2', '-gdwarf-2'),
  clang('gains.c', 'powerpc-none-eabi', '-O0', '-gdwarf-5'),
  clang('gains.c', 'mips-none-elf', '-Os', '-gdwarf-4'),
  clang('filters.cpp', 'riscv32-unknown-elf', '-O2', '-gdwarf-5'),
  clang('filters.cpp', 'aarch64-none-elf', '-O0', '-gdwarf-4'),
  clang('filters.cpp', 'x86_64-none-elf', '-Os', '-gdwarf-5'),
  clang('filters.cpp', 'powerpc-none-eabi', '-O1', '-gdwarf-4'),
  clangObject('riscv32-unknown-elf', '-O2', '-gdwarf-5'),
  clangObject('x86_64-none-elf', '-O2', '-gdwarf-4'),
  clangObject('aarch64-none-elf', '-O0', '-gdwarf-5'),
  clangObject('arm-none-eabi', '-mcpu=cortex-m4', '-Os', '-gdwarf-5'),
];

/** Builds an image into a folder and gives its path. */
export async function makeImage(build: Build, folder: string, index: number): Promise<string> {
  const image = join(folder, `${index}.elf`);
  const object = join(folder, `${index}.o`);
  for (const [program, ...args] of build.commands) {
    await run(
      program,
      args.map((arg) => (arg === '$out' ? image : arg === '$object' ? object : arg)),
      fixtures,
    );
  }
  return image;
}
