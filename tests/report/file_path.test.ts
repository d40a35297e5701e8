import { describe, expect, it } from 'vitest';
import { portablePath } from '../../src/report/file_path.js';

describe('portablePath', () => {
  it('leaves relative paths as they are, with forward slashes', () => {
    expect(portablePath('specs/a.yaml')).toBe('specs/a.yaml');
    expect(portablePath('..\\firmware\\a.c', '/repo')).toBe('../firmware/a.c');
  });

  it('writes what lies below the root relative to it', () => {
    expect(portablePath('/repo/src/a.c', '/repo')).toBe('src/a.c');
    expect(portablePath('/repo/src/a.c', '/repo/')).toBe('src/a.c');
    expect(portablePath('/repo/..data/a.c', '/repo')).toBe('..data/a.c');
    expect(portablePath('C:\\repo\\a.c', 'C:\\repo')).toBe('a.c');
  });

  it('says nothing of other places than the name', () => {
    expect(portablePath('/other/a.c', '/repo')).toBe('a.c');
    expect(portablePath('/repository/a.c', '/repo')).toBe('a.c');
    expect(portablePath('/repo', '/repo')).toBe('repo');
    expect(portablePath('/home/me/a.c')).toBe('a.c');
    expect(portablePath('d:/x/a.c', '/repo')).toBe('a.c');
  });
});
