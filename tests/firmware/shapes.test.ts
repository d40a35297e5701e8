import { describe, expect, test } from 'vitest';
import { at, encoding, form, tag } from '../../src/firmware/dwarf/codes.js';
import { openImage, readCoefficient } from '../../src/firmware/index.js';
import { ByteWriter } from './byte_writer.js';
import { addressOf, baseType, debugSections, type EntrySpec, variable } from './dwarf_builder.js';
import { allocated, type ElfSpec, elfOf } from './elf_builder.js';

/** Shapes of types which this machine's compilers do not write, but others do: older versions, odd orders, explicit strides. */
const types = [
  baseType('float', 'float', 4, encoding.float),
  baseType('short', 'short', 2, encoding.signed),
  baseType('u8', 'unsigned char', 1, encoding.unsignedCharacter),
  baseType('u32', 'unsigned int', 4, encoding.unsigned),
];
const contents = new ByteWriter();
for (const value of [1, 2, 3, 4, 5, 6]) contents.u32(new Uint32Array(new Float32Array([value]).buffer)[0]);
contents.u32(0xa5c3f00f);

function read(
  entries: EntrySpec[],
  path: string,
  options: Partial<ElfSpec> = {},
  version: 2 | 3 | 4 | 5 = 4,
) {
  const { littleEndian } = options;
  const data = {
    name: '.rodata',
    flags: allocated,
    address: 0x1000,
    bytes: options.sections?.[0].bytes ?? contents.result,
  };
  const bytes = elfOf({
    ...options,
    sections: [data, ...debugSections({ version, littleEndian, entries: [...types, ...entries] })],
  });
  return readCoefficient(openImage(bytes, 'built.elf'), { name: 'gain', at: path });
}

function array(
  label: string,
  element: string,
  dimensions: EntrySpec[],
  more: EntrySpec['attributes'] = [],
): EntrySpec {
  return {
    tag: tag.arrayType,
    label,
    attributes: [[at.type, form.ref4, { to: element }], ...more],
    children: dimensions,
  };
}

const dimension = (...attributes: EntrySpec['attributes']): EntrySpec => ({
  tag: tag.subrangeType,
  attributes,
});
const values = (coefficient: { elements: { value: number }[] }) =>
  coefficient.elements.map((element) => element.value);

describe('arrays', () => {
  test('dimensions by count or upper bound, with a lower bound of one', () => {
    const entries = [
      array('a', 'float', [
        dimension([at.count, form.data1, 2]),
        dimension([at.lowerBound, form.data1, 1], [at.upperBound, form.data1, 3]),
      ]),
      variable('grid', 'a', 0x1000),
    ];
    const grid = read(entries, 'grid');
    expect([grid.shape, grid.type, values(grid)]).toEqual([[2, 3], 'float[2][3]', [1, 2, 3, 4, 5, 6]]);
    expect(values(read(entries, 'grid[1]'))).toEqual([4, 5, 6]);
    expect(values(read(entries, 'grid[1][2]'))).toEqual([6]);
    expect(() => read(entries, 'grid[2]')).toThrow(/has 2 elements: \[2\] must be at most \[1\]/);
    expect(() => read(entries, 'grid[0][3]')).toThrow(/“grid\[0\]” has 3 elements/);
  });

  test('an array of a typedef of an array has both dimensions', () => {
    const entries = [
      array('inner', 'float', [dimension([at.count, form.data1, 3])]),
      {
        tag: tag.typedef,
        label: 'row',
        attributes: [
          [at.name, form.string, 'row_t'],
          [at.type, form.ref4, { to: 'inner' }],
        ],
      } as EntrySpec,
      array('outer', 'row', [dimension([at.count, form.data1, 2])]),
      variable('grid', 'outer', 0x1000),
    ];
    expect(read(entries, 'grid').shape).toEqual([2, 3]);
  });

  test('a stride wider than its element is kept', () => {
    const entries = [
      array('a', 'float', [dimension([at.count, form.data1, 3])], [[at.byteStride, form.data1, 8]]),
      variable('odd', 'a', 0x1000),
    ];
    expect(values(read(entries, 'odd'))).toEqual([1, 3, 5]);
    expect(read(entries, 'odd[1]').elements[0].address).toBe(0x1008);
  });

  test.each<[string, EntrySpec]>([
    ['no bound', dimension()],
    ['an upper bound of −1', dimension([at.upperBound, form.sdata, -1])],
    ['the same in 32 bits', dimension([at.upperBound, form.data4, 0xffffffff])],
  ])('a flexible one, by %s, is as long as its symbol', (_, bounds) => {
    const entries = [
      array('a', 'float', [bounds]),
      { ...variable('open', 'a', 0x1008), attributes: [...variable('open', 'a', 0x1008).attributes] },
    ];
    expect(values(read(entries, 'open', { symbols: [{ name: 'open', address: 0x1008, size: 12 }] }))).toEqual(
      [3, 4, 5],
    );
    expect(() => read(entries, 'open')).toThrow(
      /an array whose length is not known: name an element, as in open\[0\]/,
    );
    expect(values(read(entries, 'open[1]'))).toEqual([4]);
  });

  test('a length that is computed while the program runs', () => {
    const entries = [
      array('a', 'float', [dimension([at.upperBound, form.exprloc, Uint8Array.from([0x91, 0])])]),
      variable('vla', 'a', 0x1000),
    ];
    expect(() => read(entries, 'vla')).toThrow(/whose length is not known/);
  });
});

describe('byte order', () => {
  test('a type that states its own order is read in it', () => {
    const big = baseType('big', 'float', 4, encoding.float);
    big.attributes.push([at.endianity, form.data1, 1]);
    const bytes = new ByteWriter(false).u32(0x3fa00000).result;
    const options = { sections: [{ name: '.rodata', bytes }] };
    expect(read([big, variable('kp', 'big', 0x1000)], 'kp', options).elements[0]).toMatchObject({
      value: 1.25,
      stored: '0x3fa00000',
    });
  });

  test('a big-endian image with a constant in the debug information', () => {
    const constant: EntrySpec = {
      tag: tag.variable,
      attributes: [
        [at.name, form.string, 'kp'],
        [at.type, form.ref4, { to: 'float' }],
        [at.constValue, form.data4, 0x3fa00000],
      ],
    };
    expect(read([constant], 'kp', { littleEndian: false }).elements[0].value).toBe(1.25);
  });
});

describe('bit-fields', () => {
  /** Bits of 0xa5c3f00f counted from the least significant: the storage unit stands at 0x1018. */
  const record = (attributes: EntrySpec['attributes'], type = 'u32'): EntrySpec[] => [
    {
      tag: tag.structureType,
      label: 's',
      attributes: [
        [at.name, form.string, 'flags'],
        [at.byteSize, form.data1, 4],
      ],
      children: [
        {
          tag: tag.member,
          attributes: [[at.name, form.string, 'field'], [at.type, form.ref4, { to: type }], ...attributes],
        },
      ],
    },
    variable('flags', 's', 0x1018),
  ];

  test.each<[string, EntrySpec['attributes'], number, string]>([
    [
      'version 4: bits from the start',
      [
        [at.bitSize, form.data1, 5],
        [at.dataBitOffset, form.data1, 12],
      ],
      (0xa5c3f00f >>> 12) & 31,
      '0x1f',
    ],
    [
      'version 2: bits from the top of the unit',
      [
        [at.byteSize, form.data1, 4],
        [at.bitSize, form.data1, 4],
        [at.bitOffset, form.data1, 0],
        [at.memberLocation, form.data1, 0],
      ],
      0xa,
      '0xa',
    ],
    [
      'a whole unit',
      [
        [at.bitSize, form.data1, 32],
        [at.dataBitOffset, form.data1, 0],
      ],
      0xa5c3f00f,
      '0xa5c3f00f',
    ],
    [
      'one bit',
      [
        [at.bitSize, form.data1, 1],
        [at.dataBitOffset, form.data1, 31],
      ],
      1,
      '0x1',
    ],
  ])('%s', (_, attributes, value, stored) => {
    expect(read(record(attributes), 'flags.field').elements[0]).toMatchObject({ value, stored });
  });

  test('a signed one keeps its sign', () => {
    const attributes: EntrySpec['attributes'] = [
      [at.bitSize, form.data1, 4],
      [at.dataBitOffset, form.data1, 0],
    ];
    expect(read(record(attributes, 'short'), 'flags.field')).toMatchObject({
      type: 'short : 4',
      elements: [{ value: -1, stored: '0xf' }],
    });
  });

  test('a big-endian one counts from the most significant bit', () => {
    const attributes: EntrySpec['attributes'] = [
      [at.bitSize, form.data1, 8],
      [at.dataBitOffset, form.data1, 4],
    ];
    const bytes = new ByteWriter(false).raw(new Uint8Array(24)).u32(0xa5c3f00f).result;
    const entries = record(attributes);
    entries[1].attributes[2] = [at.location, form.exprloc, addressOf(0x1018, false)];
    const options = { littleEndian: false, sections: [{ name: '.rodata', bytes }] };
    expect(read(entries, 'flags.field', options).elements[0].value).toBe(0x5c);
  });
});

describe('structs', () => {
  const member = (
    name: string | undefined,
    type: string,
    offset: EntrySpec['attributes'][number],
  ): EntrySpec => ({
    tag: tag.member,
    attributes: [
      ...(name === undefined ? [] : [[at.name, form.string, name] as EntrySpec['attributes'][number]]),
      [at.type, form.ref4, { to: type }],
      offset,
    ],
  });
  const struct = (label: string, size: number, children: EntrySpec[]): EntrySpec => ({
    tag: tag.structureType,
    label,
    attributes: [
      [at.name, form.string, label],
      [at.byteSize, form.data1, size],
    ],
    children,
  });

  test('version 2 writes offsets as expressions', () => {
    const offset = Uint8Array.from([0x23, 8]);
    const entries = [
      struct('s', 16, [member('gain', 'float', [at.memberLocation, form.block1, offset])]),
      variable('axis', 's', 0x1000),
    ];
    entries[1].attributes[2] = [at.location, form.block1, addressOf(0x1000)];
    expect(values(read(entries, 'axis.gain', {}, 2))).toEqual([3]);
  });

  test('members of anonymous structs and of bases are written as the outer one’s, their own names first', () => {
    const entries: EntrySpec[] = [
      struct('base', 8, [
        member('rate', 'float', [at.memberLocation, form.data1, 4]),
        member('gain', 'float', [at.memberLocation, form.data1, 0]),
      ]),
      struct('inner', 4, [member('deep', 'float', [at.memberLocation, form.data1, 0])]),
      struct('outer', 24, [
        {
          tag: tag.inheritance,
          attributes: [
            [at.type, form.ref4, { to: 'base' }],
            [at.memberLocation, form.data1, 4],
          ],
        },
        member(undefined, 'inner', [at.memberLocation, form.data1, 16]),
        member('gain', 'float', [at.memberLocation, form.data1, 0]),
      ]),
      variable('axis', 'outer', 0x1000),
    ];
    expect(values(read(entries, 'axis.gain'))).toEqual([1]);
    expect(values(read(entries, 'axis.rate'))).toEqual([3]);
    expect(values(read(entries, 'axis.deep'))).toEqual([5]);
  });

  test('an array of structs has no members before it has an index', () => {
    const entries = [
      struct('s', 8, [member('gain', 'float', [at.memberLocation, form.data1, 4])]),
      array('a', 's', [dimension([at.count, form.data1, 3])]),
      variable('axes', 'a', 0x1000),
    ];
    expect(values(read(entries, 'axes[2].gain'))).toEqual([6]);
    expect(() => read(entries, 'axes.gain')).toThrow(/“axes” is an array of struct s: write axes\[0\]\.gain/);
    expect(() => read(entries, 'axes')).toThrow(
      /name one of its members, as in axes\.gain|is of type struct s\[3\]/,
    );
  });

  test('an enumeration gives the name of its value, negative ones too', () => {
    const enumeration: EntrySpec = {
      tag: tag.enumerationType,
      label: 'e',
      attributes: [
        [at.name, form.string, 'mode'],
        [at.byteSize, form.data1, 4],
      ],
      children: [
        {
          tag: tag.enumerator,
          attributes: [
            [at.name, form.string, 'STOW'],
            [at.constValue, form.sdata, -2],
          ],
        },
        {
          tag: tag.enumerator,
          attributes: [
            [at.name, form.string, 'TRACK'],
            [at.constValue, form.sdata, 3],
          ],
        },
      ],
    };
    const options = { sections: [{ name: '.rodata', bytes: new ByteWriter().u32(-2).u32(7).result }] };
    const entries = [enumeration, variable('mode', 'e', 0x1000), variable('other', 'e', 0x1004)];
    expect(read(entries, 'mode', options)).toMatchObject({
      type: 'enum mode',
      elements: [{ value: -2, enumerator: 'STOW' }],
    });
    expect(read(entries, 'other', options).elements[0].enumerator).toBeUndefined();
  });
});
