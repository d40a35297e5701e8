import { execFileSync } from 'node:child_process';
import { describe, expect, it } from 'vitest';
import { drawingFiles } from '../../src/report/drawing_files.js';
import { markdownSummary } from '../../src/report/index.js';
import { hostileNames } from './hostile.js';
import { hasTool } from './outside_tool.js';
import { gainPlot, openLoopPlot, tracePlot } from './sample_plots.js';
import { requirement, sampleRun } from './sample_run.js';

const broken = (name: string) => requirement({ name, verdict: { kind: 'broken', why: 'a plant breaks it' } });
const plotsOf = (name: string) => ({
  traces: [{ ...tracePlot, requirements: [name] }],
  loops: [],
  gains: [],
  planes: [],
  undrawn: [],
});

describe('files that draw what is not met', () => {
  const run = sampleRun({
    requirements: [
      broken('AZ-1'),
      requirement({ name: 'AZ-2' }),
      broken('az-1'),
      broken('GM'),
      broken('none'),
    ],
  });
  const plots = {
    traces: [{ ...tracePlot, requirements: ['AZ-2', 'AZ-1', 'az-1'] }],
    loops: [{ ...openLoopPlot, requirements: ['GM'] }],
    gains: [{ ...gainPlot, requirements: ['other'] }],
    planes: [],
    undrawn: [],
  };
  const [files] = drawingFiles(run, [plots]);

  it('are one for each such requirement that is drawn, told apart also where capitals do not count', () => {
    expect(files.map(({ path, requirement }) => [path, requirement])).toEqual([
      ['plots/1-AZ-1.svg', 'AZ-1'],
      ['plots/1-az-1-2.svg', 'az-1'],
      ['plots/1-GM.svg', 'GM'],
    ]);
  });

  it('are named in the summary with their requirement, and nothing is where there are none', () => {
    const text = markdownSummary(run, [], [files]);
    expect(text).toMatch(
      /\*\*AZ-1\*\*[^*]*\n(?: {2}- .*\n)* {2}- drawn in `plots\/1-AZ-1\.svg`: nominal solid, worst dashed$/m,
    );
    expect(text.match(/drawn in/g)).toHaveLength(3);
    expect(markdownSummary(run)).not.toContain('drawn in');
  });

  it('need no page around them: their namespace, colours and size are their own', () => {
    for (const { text } of files) {
      expect(text).toMatch(
        /^<svg xmlns="http:\/\/www\.w3\.org\/2000\/svg" width="960" class="drawing" viewBox/,
      );
      expect(text.match(/<style>/g)).toHaveLength(1);
      expect(text).toContain('--petrol:#0f6472');
      expect(text).not.toMatch(/https?:\/\/(?!www\.w3\.org\/2000\/svg")/);
    }
  });

  it.each(Object.entries(hostileNames))('have harmless paths for a hostile name: %s', (_, name) => {
    const [[file]] = drawingFiles(sampleRun({ requirements: [broken(name)] }), [plotsOf(name)]);
    expect(file.path).toMatch(/^plots\/1-[\w.-]*\.svg$/);
    expect(file.path.length).toBeLessThan(80);
  });

  it.runIf(hasTool('xmllint', 'libxml2-utils'))('are well-formed XML, whatever the names', () => {
    for (const name of Object.values(hostileNames)) {
      const [[file]] = drawingFiles(sampleRun({ requirements: [broken(name)] }), [plotsOf(name)]);
      execFileSync('xmllint', ['--noout', '-'], { input: file.text, stdio: ['pipe', 'ignore', 'pipe'] });
    }
    for (const { text } of files) execFileSync('xmllint', ['--noout', '-'], { input: text });
  });
});
