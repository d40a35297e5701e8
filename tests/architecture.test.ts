import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join, normalize } from 'node:path';
import { describe, expect, it } from 'vitest';
import * as library from '../src/index.js';

/** Which folders a folder may import; types of a finished run are free for the reports. */
const mayImport: Record<string, string[]> = {
  spec: [],
  firmware: [],
  loop: ['spec', 'firmware'],
  linear: ['loop', 'spec'],
  kernel: ['loop', 'linear', 'spec'],
  measure: ['loop', 'linear', 'kernel', 'spec'],
  perturb: ['measure', 'kernel', 'linear', 'loop', 'spec'],
  verdict: ['perturb', 'measure', 'kernel', 'linear', 'loop', 'spec', 'firmware'],
  report: ['verdict', 'measure', 'perturb', 'spec', 'firmware'],
  plots: ['report', 'verdict', 'perturb', 'measure', 'kernel', 'linear', 'loop', 'spec'],
};
/** Rooms of which only types may be used, by folder. */
const typesOnly: Record<string, string[]> = {
  loop: ['firmware'],
  verdict: ['firmware'],
  report: ['verdict', 'measure', 'perturb', 'spec', 'firmware'],
};

interface Import {
  from: string;
  to: string;
  typeOnly: boolean;
}

const files = readdirSync('src', { recursive: true, encoding: 'utf8' })
  .filter((path) => path.endsWith('.ts'))
  .map((path) => join('src', path));

const imports: Import[] = files.flatMap((from) => {
  const text = readFileSync(from, 'utf8');
  const found = text.matchAll(/^(?:import|export)\s+(type\s)?[^;]*?from\s+'(\.[^']*)'/gm);
  return [...found].map(([statement, type, path]) => ({
    from,
    to: normalize(join(dirname(from), path)).replace(/\.js$/, '.ts'),
    typeOnly: type !== undefined || allNamesAreTypes(statement),
  }));
});

function allNamesAreTypes(statement: string): boolean {
  const names = /\{([^}]*)\}/.exec(statement)?.[1].split(',') ?? [];
  return names.length > 0 && names.every((name) => name.trim() === '' || name.trim().startsWith('type '));
}

const roomOf = (path: string): string => path.split('/')[1];

describe('the house', () => {
  it('has walls: a folder imports only what lies before it on the data’s way', () => {
    const wrong = imports.filter(({ from, to, typeOnly }) => {
      const [room, other] = [roomOf(from), roomOf(to)];
      if (room === other || !(room in mayImport)) return false;
      return !mayImport[room].includes(other) || (typesOnly[room]?.includes(other) && !typeOnly);
    });
    expect(wrong).toEqual([]);
  });

  it('is not used by its own rooms through the library’s front door', () => {
    expect(imports.filter(({ to }) => to === 'src/index.ts')).toEqual([]);
  });

  it('has no import loops between files, types apart', () => {
    const next = new Map<string, string[]>();
    for (const { from, to, typeOnly } of imports) {
      if (!typeOnly) next.set(from, [...(next.get(from) ?? []), to]);
    }
    const done = new Set<string>();
    const visit = (file: string, path: string[]): string[] | undefined => {
      if (path.includes(file)) return [...path.slice(path.indexOf(file)), file];
      if (done.has(file)) return undefined;
      for (const following of next.get(file) ?? []) {
        const loop = visit(following, [...path, file]);
        if (loop) return loop;
      }
      done.add(file);
      return undefined;
    };
    for (const file of files) expect(visit(file, [])).toBeUndefined();
  });

  it('keeps its public surface: a change of it is a decision, made here', () => {
    expect(Object.keys(library).sort()).toEqual([
      'FirmwareError',
      'check',
      'compareImages',
      'formatSpecError',
      'htmlReport',
      'jsonSchemaOf',
      'judgeSpec',
      'junitOf',
      'loadSpec',
      'markdownSummary',
      'openImage',
      'openImageFile',
      'readCoefficient',
      'readCoefficients',
      'runJson',
      'vocabulary',
    ]);
  });
});
