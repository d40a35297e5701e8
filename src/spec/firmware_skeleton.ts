import { z } from 'zod';
import { command, named, text, unit } from './skeleton_slots.js';

const path = (what: string) => text(`the path of ${what}, relative to this file`);

const source = z
  .strictObject({
    file: path('a C or C++ source or header'),
    include_paths: z
      .array(path('a folder'))
      .min(1)
      .describe('a list of folders, such as [firmware/include]')
      .optional(),
    defines: z
      .record(z.string(), text('a value such as 1'))
      .describe('macros and their values, such as { BOARD_B: 1 }')
      .optional(),
    compiler: z
      .union([text('a C compiler'), z.array(text('an argument')).min(1)])
      .describe('a C compiler such as cc, or a list such as [arm-none-eabi-gcc, -mcpu=cortex-m4]')
      .optional(),
  })
  .describe('{ file: gains.h, include_paths: […], defines: { … }, compiler: … }');

/** Path of an image. */
const imagePath = path('the image');

/** Where the numbers of a build stand; which of these go together is checked when they are read. */
const originSlots = {
  image: imagePath.optional(),
  base_address: text('an address such as 0x08000000').optional(),
  byte_order: text('little or big').optional(),
  symbols: path('an ELF file of the same build').optional(),
  debug_file: path('the file with the debug information').optional(),
  source: source.optional(),
  command: command.unwrap().describe('a list of arguments, such as [node, print-gains.mjs]').optional(),
};

const factor = (what: string) =>
  z
    .union([text(what), z.array(text(what)).min(1)])
    .describe(`${what}, or a list with one for each element`)
    .optional();

/** A coefficient: its place in the build, or a mapping with more about it. */
const coefficient = z
  .union([
    text('where it is in the build, such as drive.gains.kp'),
    z.strictObject({
      at: text('where it is in the build, such as drive.gains.kp').optional(),
      address: text('an address such as 0x08001f40').optional(),
      count: text('how many numbers stand at the address').optional(),
      format: text('a number format such as Q2.14').optional(),
      unit,
      scale: factor('a number such as 0.01'),
      offset: factor('a number such as -40'),
      starts_at_zero: text('true or false').optional(),
    }),
  ])
  .describe('where it is in the build, such as drive.gains.kp, or { at: …, unit: …, format: … }');

/** One of several builds. */
export const build = z
  .union([imagePath, z.strictObject({ ...originSlots, build: command })])
  .describe('the path of an image, or { image: …, build: … }');

/** The section `firmware`. */
export const firmware = z
  .strictObject({
    build: command,
    ...originSlots,
    coefficients: named(coefficient, 'coefficients'),
    law: z
      .array(text('the name of a function'))
      .min(1)
      .describe('a list of functions, such as [control_step]')
      .optional(),
  })
  .describe('a mapping with image, and coefficients by name');
