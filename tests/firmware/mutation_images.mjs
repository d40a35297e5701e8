import { execFileSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const cwd = fileURLToPath(new URL('./fixtures/', import.meta.url));

/** The sound images which are damaged: every format and the ways in which compilers pack debug information. */
export function soundImages(folder) {
  const arm = ['-mcpu=cortex-m4', '-mthumb', '-ffreestanding', '-nostdlib'];
  const jobs = [
    ['dwarf5', 'arm-none-eabi-gcc', ...arm, '-O2', '-gdwarf-5', 'gains.c'],
    ['dwarf4', 'arm-none-eabi-gcc', ...arm, '-O0', '-gdwarf-4', '-fdebug-types-section', 'gains.c'],
    ['dwarf2', 'arm-none-eabi-gcc', ...arm, '-Os', '-gdwarf-2', 'gains.c'],
    ['packed', 'arm-none-eabi-gcc', ...arm, '-O2', '-g', '-gz', 'gains.c'],
    ['merged', 'arm-none-eabi-gcc', ...arm, '-O2', '-g', '-flto', 'gains.c'],
    ['classes', 'arm-none-eabi-g++', ...arm, '-O2', '-g', 'filters.cpp'],
    ['bare', 'arm-none-eabi-gcc', ...arm, '-O2', '-g0', 'gains.c'],
    ['object', 'clang', '--target=riscv32', '-ffreestanding', '-O2', '-gdwarf-5', '-c', 'gains.c'],
    ['wide', 'clang', '--target=x86_64-none-elf', '-ffreestanding', '-O1', '-gdwarf-5', '-c', 'gains.c'],
    ['big', 'clang', '--target=powerpc-none-eabi', '-ffreestanding', '-O1', '-gdwarf-4', '-c', 'gains.c'],
  ];
  const images = new Map();
  for (const [name, program, ...args] of jobs) {
    const path = join(folder, name);
    execFileSync(program, [...args, '-o', path], { cwd });
    images.set(name, readFileSync(path));
  }
  for (const [name, target] of [
    ['hex', 'ihex'],
    ['records', 'srec'],
  ]) {
    const path = join(folder, name);
    execFileSync('arm-none-eabi-objcopy', ['-O', target, join(folder, 'dwarf5'), path], { cwd });
    images.set(name, readFileSync(path));
  }
  return images;
}

/** Paths which lead through every kind of type. */
export const askedPaths = [
  'azimuth.gains.ki',
  'azimuth.bias',
  'azimuth.drive',
  'azimuth_notch',
  'channels[1].slope',
  'flexible.taps',
  'active_gains->kd',
  'update::taps[1]',
  'cleared',
  'drive::limits.rate',
  'gain_reference',
  'azimut',
];
