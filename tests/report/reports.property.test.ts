import fc from 'fast-check';
import { parse } from 'junit2json';
import { describe, expect, it } from 'vitest';
import {
  annotationLines,
  htmlReport,
  junitOf,
  markdownSummary,
  runJson,
  terminalReport,
} from '../../src/report/index.js';
import { columnsOf } from '../../src/report/plain_text.js';
import { limitStrip } from '../../src/report/plot/limit_strip.js';
import { blocksMerge } from '../../src/report/verdict_words.js';
import { anyFaults, anyRequirement, anyRun } from './arbitrary_run.js';
import { harmful } from './hostile.js';

const settings = { seed: 91, numRuns: 60 };

/** Laws that hold for every run whatever is in it: a report is never missing because something in it is odd. */
describe('every report', () => {
  it('is written and holds nothing harmful', () => {
    fc.assert(
      fc.property(anyRun, anyFaults, (run, faults) => {
        expect(terminalReport(run, { colour: false, width: 100 }, faults)).not.toMatch(harmful);
        expect(junitOf(run, faults)).not.toMatch(harmful);
        expect(runJson(run)).not.toMatch(harmful);
        expect(markdownSummary(run, faults)).not.toMatch(harmful);
        expect(annotationLines(run, faults)).not.toMatch(harmful);
        expect(htmlReport(run, { faults })).not.toMatch(harmful);
      }),
      settings,
    );
  });

  it('says the same verdict on the whole', () => {
    fc.assert(
      fc.property(anyRun, anyFaults, (run, faults) => {
        const verdicts = run.specs.flatMap(({ requirements }) =>
          requirements.map(({ verdict }) => verdict.kind),
        );
        const passes = faults.length === 0 && verdicts.length > 0 && verdicts.every((kind) => kind === 'met');
        const said = passes ? 'merge may go through' : 'merge blocked';
        const other = passes ? 'merge blocked: ' : 'merge may go through: ';
        expect(terminalReport(run, { colour: false, width: 100 }, faults).split('\n').at(-4)).toContain(said);
        expect(markdownSummary(run, faults).split('\n')[0]).toContain(said);
        const title = htmlReport(run, { faults }).match(/<h1.*?<\/h1>/s)![0];
        expect(title).toContain(said);
        expect(title).not.toContain(other);
      }),
      settings,
    );
  });
});

describe('each report', () => {
  it('on a terminal fits its width', () => {
    fc.assert(
      fc.property(anyRun, fc.integer({ min: 80, max: 140 }), (run, width) => {
        for (const line of terminalReport(run, { colour: false, width }).split('\n')) {
          expect(columnsOf(line)).toBeLessThanOrEqual(Math.min(100, width));
        }
      }),
      settings,
    );
  });

  it('as JUnit has a case for each requirement and the right counts', async () => {
    await fc.assert(
      fc.asyncProperty(anyRun, anyFaults, async (run, faults) => {
        const read = await parse(junitOf(run, faults));
        const suites = (read && 'testsuite' in read && read.testsuite) || [];
        expect(suites).toHaveLength(run.specs.length + faults.length);
        run.specs.forEach(({ requirements }, at) => {
          const kinds = requirements.map(({ verdict }) => verdict.kind);
          expect(suites[at].testcase ?? []).toHaveLength(requirements.length);
          const failing = requirements.filter(
            (one) => ['broken', 'slipped'].includes(one.verdict.kind) && blocksMerge(one),
          );
          expect(suites[at].failures).toBe(failing.length);
          expect(suites[at].errors).toBe(kinds.filter((kind) => kind === 'unjudged').length);
        });
        for (const suite of suites.slice(run.specs.length)) expect(suite.errors).toBe(1);
      }),
      settings,
    );
  });

  it('as JSON keeps every number and text', () => {
    fc.assert(
      fc.property(anyRun, (run) => {
        const read = JSON.parse(runJson(run));
        run.specs.forEach((spec, s) => {
          expect(read.specs[s].loop).toBe(spec.loop.toWellFormed());
          spec.requirements.forEach(({ worst, verdict }, r) => {
            const written = read.specs[s].requirements[r];
            expect(written.verdict).toBe(verdict.kind);
            if (worst.result.kind !== 'value') expect(written.worst).toBeNull();
            else if (Number.isFinite(worst.result.value)) expect(written.worst).toBe(worst.result.value + 0);
            else expect(written.worst).toMatch(/infinite$/);
            if (worst.result.kind === 'unformed') expect(typeof written.worst_why).toBe('string');
          });
        });
      }),
      settings,
    );
  });

  it('as a page has an article for each requirement, and draws no coordinate that is not a number', () => {
    fc.assert(
      fc.property(anyRun, (run) => {
        const page = htmlReport(run);
        const requirements = run.specs.flatMap((spec) => spec.requirements);
        expect(page.split('<article').length - 1).toBe(requirements.length);
        expect(page).not.toMatch(/ (d|x|y|cx|cy|r|width|height)="[^"]*(NaN|Infinity)/);
      }),
      settings,
    );
  });

  it('as a comment stays below its size', () => {
    fc.assert(
      fc.property(anyRun, anyFaults, (run, faults) => markdownSummary(run, faults).length < 65_536),
      settings,
    );
  });

  it('as annotations has one line for each requirement that blocks and each cause', () => {
    fc.assert(
      fc.property(anyRun, anyFaults, (run, faults) => {
        const notMet = run.specs
          .flatMap((spec) => spec.requirements)
          .filter(({ verdict }) => verdict.kind !== 'met');
        const blocking = notMet.filter(blocksMerge);
        const causes = faults.flatMap(({ messages }) => messages);
        const lines = annotationLines(run, faults).split('\n').slice(0, -1);
        expect(lines).toHaveLength(notMet.length + causes.length);
        for (const line of lines) expect(line).toMatch(/^::(error|warning) file=/);
        const errors = lines.filter((line) => line.startsWith('::error'));
        expect(errors).toHaveLength(blocking.length + causes.length);
      }),
      settings,
    );
  });
});

describe('the strip of a limit', () => {
  it('keeps values on their side of the limit, up to the width of a tenth of a px', () => {
    const range = fc.double({ min: -1e6, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(anyRequirement, range, range, (one, limit, worst) => {
        const requirement = {
          ...one,
          inDecibels: false,
          limit: { at_most: limit },
          worst: { ...one.worst, result: { kind: 'value' as const, value: worst } },
        };
        const text = limitStrip(requirement, 'id').text;
        const fence = Number(text.match(/class="fence" d="M(-?[\d.]+)/)![1]);
        const point = Number(text.match(/class="worst-point" d="M(-?[\d.]+)/)![1]);
        if (worst <= limit) expect(point).toBeLessThanOrEqual(fence + 0.1);
        else expect(point).toBeGreaterThanOrEqual(fence - 0.1);
      }),
      settings,
    );
  });
});
