import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { annotationLines, annotationsOf, workflowCommand } from '../../src/report/annotations.js';
import { harmful, hostileNames } from './hostile.js';
import { hostileRun } from './hostile_run.js';
import { metRun, sampleRun } from './sample_run.js';

const empty = { version: '1', specs: [] };

/**
 * Reads a line as the runner does, from the public description of workflow commands: `::command key=value,…::data`;
 * in data `%25 %0D %0A` stand for themselves, in values `%3A %2C` too.
 */
function readBack(line: string) {
  const [, command, list, data] = /^::(\w+) (.*?)::(.*)$/.exec(line)!;
  const unescaped = (text: string): string =>
    text
      .replaceAll('%0A', '\n')
      .replaceAll('%0D', '\r')
      .replaceAll('%3A', ':')
      .replaceAll('%2C', ',')
      .replaceAll('%25', '%');
  const properties = Object.fromEntries(
    list
      .split(',')
      .map((pair) => [pair.slice(0, pair.indexOf('=')), unescaped(pair.slice(pair.indexOf('=') + 1))]),
  );
  return { command, properties, message: unescaped(data) };
}

describe('annotations', () => {
  it('stand on the line of each requirement that blocks the merge', () => {
    const lines = annotationLines(sampleRun()).trimEnd().split('\n').map(readBack);
    expect(lines.map(({ properties }) => properties.title)).toEqual([
      'AZ-2 broken',
      'AZ-3 broken',
      'AZ-4 unjudged',
    ]);
    expect(lines[1]).toEqual({
      command: 'error',
      properties: { file: 'specs/heliostat/azimuth.pawl.yaml', line: '61', col: '5', title: 'AZ-3 broken' },
      message: expect.stringMatching(
        /^AZ-3 is broken: .*: 30\.003 mrad; limit at most 30 mrad; headroom -0\.01 %; plant: friction/,
      ),
    });
    expect(annotationLines(metRun())).toBe('');
  });

  it('point from a cause to its place, or to the spec as a whole', () => {
    const faults = [
      {
        specFile: 'a.pawl.yaml',
        messages: ['/repo/a.pawl.yaml:8:5: no such symbol: "kq"', 'the build failed'],
      },
    ];
    expect(annotationsOf(empty, faults, '/repo')).toEqual([
      {
        level: 'error',
        file: 'a.pawl.yaml',
        line: 8,
        column: 5,
        title: 'pawl could not run',
        message: 'no such symbol: "kq"',
      },
      {
        level: 'error',
        file: 'a.pawl.yaml',
        line: undefined,
        column: undefined,
        title: 'pawl could not run',
        message: 'the build failed',
      },
    ]);
    expect(annotationLines(empty, faults, '/repo').split('\n')[1]).toBe(
      '::error file=a.pawl.yaml,title=pawl could not run::the build failed',
    );
  });

  it.each(Object.entries(hostileNames))(
    'are one line each and no other command for a hostile name: %s',
    (_, name) => {
      const text = annotationLines(hostileRun(name), [{ specFile: name, messages: [name] }]);
      expect(text).not.toMatch(harmful);
      const lines = text.trimEnd().split('\n');
      expect(lines).toHaveLength(4);
      for (const line of lines) {
        expect(readBack(line).command).toBe('error');
        expect(Object.keys(readBack(line).properties)).toEqual(expect.arrayContaining(['file', 'title']));
        expect(line.length).toBeLessThan(10_000);
      }
    },
  );

  it('are read back as they were written', () => {
    const text = fc.stringMatching(/^[ -~]{1,40}$/);
    fc.assert(
      fc.property(text, text, text, fc.nat(), (file, title, message, line) => {
        const command = workflowCommand({ level: 'warning', file, line, column: 1, title, message });
        expect(readBack(command)).toEqual({
          command: 'warning',
          properties: { file, title, line: String(line), col: '1' },
          message,
        });
      }),
      { seed: 31, numRuns: 500 },
    );
  });
});
