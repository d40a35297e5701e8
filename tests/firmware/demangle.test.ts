import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { demangledData } from '../../src/firmware/elf/demangle.js';
import { leaveOut, run } from './toolchain.js';

/** Mangled data names of the Itanium C++ ABI become what a programmer writes; `c++filt` of binutils is the witness. */
const names: [mangled: string, written: string][] = [
  ['_ZN5drive6Limits5slopeE', 'drive::Limits::slope'],
  ['_ZN5drive6limitsE', 'drive::limits'],
  ['_ZL4gain', 'gain'],
  ['_ZN5driveL4gainE', 'drive::gain'],
  ['_ZN6FilterIfLi3EE4tapsE', 'Filter<float, 3>::taps'],
  ['_ZN6FilterIdLin3EE4tapsE', 'Filter<double, -3>::taps'],
  ['_ZN6FilterItLj3EE4tapsE', 'Filter<unsigned short, 3u>::taps'],
  ['_ZN6FilterIfLb1EE4tapsE', 'Filter<float, true>::taps'],
  ['_ZN1aI1bI1cEE1dE', 'a<b<c> >::d'],
  ['_ZN2ns1aINS_1bEE1dE', 'ns::a<ns::b>::d'],
  ['_ZN2ns1aINS_1bES1_E1dE', 'ns::a<ns::b, ns::b>::d'],
  ['_ZZ6updatevE4taps', 'update()::taps'],
  ['_ZZ6updatefiE4taps', 'update(float, int)::taps'],
  ['_ZZN2ns6updateEPKfE4taps', 'ns::update(float const*)::taps'],
  ['_ZZ6updatevE4taps_0', 'update()::taps'],
  ['_ZSt4cerr', 'std::cerr'],
  ['_ZNSt8ios_base4InitE', 'std::ios_base::Init'],
];

/** Without the parameters of a function, blanks, and the blank between two closing brackets that older compilers wrote. */
const plain = (written: string) => written.replace(/\([^()]*\)/g, '').replace(/\s+/g, '');

describe('demangling', () => {
  test.each(names)('%s', (mangled, written) => {
    expect(plain(demangledData(mangled)?.join('::') ?? '')).toBe(plain(written));
  });

  test.skipIf(leaveOut('c++filt'))('agrees with c++filt', async () => {
    const answers = (
      await run(
        'c++filt',
        names.map(([mangled]) => mangled),
      )
    )
      .trim()
      .split('\n');
    for (const [i, answer] of answers.entries())
      expect(plain(demangledData(names[i][0])!.join('::')), names[i][0]).toBe(plain(answer));
  });

  test('anonymous namespaces need not be written, suffixes of a compiler do not count', () => {
    expect(demangledData('_ZN5drive12_GLOBAL__N_16hiddenE')).toEqual(['drive', 'hidden']);
    expect(demangledData('_ZN5drive12_GLOBAL__N_1L6hiddenE.lto_priv.0')).toEqual(['drive', 'hidden']);
    expect(demangledData('_ZN5driveB5cxx114gainE')).toEqual(['drive', 'gain']);
  });

  test.each([
    'kp',
    '_Z',
    '_ZN',
    '_ZN5drive',
    '_ZN5drive6LimitsE6',
    '_ZNS9_1aE',
    '_ZN1aIXspEE1bE',
    `_Z${'N'.repeat(5000)}`,
    '_ZTV6Filter',
  ])('%s is no data name', (name) => {
    expect(demangledData(name)).toBeUndefined();
  });

  test('no text makes it fail or hang', () => {
    const part = fc.constantFrom(
      'N',
      'E',
      'I',
      'L',
      'S_',
      'S0_',
      'St',
      'Z',
      'P',
      'K',
      'f',
      'i',
      '1a',
      '2bc',
      '12_GLOBAL__N_1',
      'B1x',
      '_',
      '0',
    );
    fc.assert(
      fc.property(fc.array(part, { maxLength: 40 }), (parts) => {
        const result = demangledData(`_Z${parts.join('')}`);
        expect(result === undefined || result.length > 0).toBe(true);
      }),
    );
  });
});
