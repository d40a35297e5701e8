import { describe, expect, it } from 'vitest';
import { lawTable } from '../../src/report/law_table.js';
import { harmful, hostileNames } from './hostile.js';

describe('the table of a law', () => {
  it('has a row for each function', () => {
    const [head, ...rows] = lawTable([
      { name: 'init', size: 64, digest: 'ab12', calls: ['memset'] },
      { name: 'control_step', size: 368, digest: 'cd34', calls: ['a', 'b', 'c', 'd', 'e', 'init'] },
    ]).split('\n');
    expect(head).toMatch(/^function of the law +bytes +digest \(SHA-256\) +calls outside the law$/);
    expect(rows).toEqual([
      expect.stringMatching(/^init +64 +ab12 +memset$/),
      expect.stringMatching(/^control_step +368 +cd34 +a, b, c, d and 1 more$/),
      '',
    ]);
  });

  it.each(Object.entries(hostileNames))('stays one row for a hostile name: %s', (_, name) => {
    const text = lawTable([{ name, size: 1, digest: 'ab', calls: [`${name}2`] }]);
    expect(text.split('\n')).toHaveLength(3);
    for (const line of text.split('\n')) expect(line).not.toMatch(harmful);
  });
});
