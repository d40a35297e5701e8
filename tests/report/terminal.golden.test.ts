import { expect, it } from 'vitest';
import { terminalReport } from '../../src/report/terminal.js';
import { metRun, sampleRun } from './sample_run.js';

/** The layout as it was looked at on a terminal and found good; a change of it is meant to be seen here. */
const met80 = [
  'Heliostat azimuth drive',
  'specs/heliostat/azimuth.pawl.yaml',
  'image firmware/azimuth.elf (SHA-256 9f3c2a17b04e)',
  '2 coefficients, 1,108 plants tried in 2 scenarios, seed 11',
  '',
  '               requirement          limit           nominal   worst     headroom',
  '┣━┫ met  AZ-1  overshoot of angle   at most 25 %    12.1 %    19.6 %      21.6 %',
  '┣━┫ met  AZ-6  gain margin at duty  at least 6 dB   infinite  7.959 dB    25.3 %',
  '┣━┫ met  AZ-7  phase margin at      between 40 and  52 deg    52 deg        60 %',
  '               duty                 80 deg',
  '',
  'AZ-1, AZ-6: in 1,000 independent plants none failed: with 95 % confidence fewer',
  '  than 0.3 % do',
  'merge: latched reference ../../reference/latched/heliostat.json is not compared',
  '  yet',
  'judged in 1.21 s',
  '',
  '┣━┫ merge may go through: 3 requirements met',
  'A pass is evidence about a model. It does not replace guarded tests on the',
  "hardware, the codes in force and a licensed practitioner's judgement.",
];

const blocked100 = [
  'Heliostat azimuth drive',
  'specs/heliostat/azimuth.pawl.yaml',
  'image firmware/azimuth.elf (SHA-256 9f3c2a17b04e)',
  '2 coefficients, 1,108 plants tried in 2 scenarios, seed 11',
  '',
  '                    requirement              limit                  nominal    worst        headroom',
  '┣╱┫ broken    AZ-2  settling time of angle   at most 2.5 s          1.73 s     never            none',
  '    a plant within the bounds breaks it',
  '    longer than 3.8 s: never stays in the band',
  '    plant: friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound',
  '      (191.3 N*m); nothing else moved',
  '    tried 1,108 plants: broken on 12 (1.08 %)',
  "    what to do: mend the firmware, or change the limit or the bounds in the spec and say why; 'pawl",
  "      replay DIR AZ-2' runs that plant again alone, DIR being the folder of the reports",
  '    specs/heliostat/azimuth.pawl.yaml:60:5',
  '',
  '┣╱┫ broken    AZ-3  peak deviation of angle  at most 30 mrad        21.2 mrad  30.003 mrad   -0.01 %',
  '    a plant within the bounds breaks it',
  '    plant: friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound',
  '      (191.3 N*m); nothing else moved',
  '    tried 1,108 plants: broken on 3 (0.271 %)',
  "    what to do: mend the firmware, or change the limit or the bounds in the spec and say why; 'pawl",
  "      replay DIR AZ-3' runs that plant again alone, DIR being the folder of the reports",
  '    specs/heliostat/azimuth.pawl.yaml:61:5',
  '',
  '┣?┫ unjudged  AZ-4  saturated share of duty  at most 15 %           no value   no value         none',
  '    the signal has no range',
  '    plant: friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound',
  '      (191.3 N*m); nothing else moved',
  '    tried 1,108 plants: no number on 1,108',
  '    what to do: mend what the reason above names: what cannot be judged does not pass',
  '    specs/heliostat/azimuth.pawl.yaml:62:5',
  '',
  '┣━┫ met       AZ-1  overshoot of angle       at most 25 %           12.1 %     19.6 %         21.6 %',
  '┣━┫ met       AZ-6  gain margin at duty      at least 6 dB          infinite   7.959 dB       25.3 %',
  '┣━┫ met       AZ-7  phase margin at duty     between 40 and 80 deg  52 deg     52 deg           60 %',
  '',
  'AZ-1, AZ-3, AZ-6: in 1,000 independent plants none failed: with 95 % confidence fewer than 0.3 % do',
  'AZ-2: 9 of 1,000 independent plants failed: with 95 % confidence fewer than 1.6 % do',
  'merge: latched reference ../../reference/latched/heliostat.json is not compared yet',
  'judged in 1.21 s',
  '',
  '┣╱┫ merge blocked: 2 broken, 1 unjudged, 3 met',
  'A pass is evidence about a model. It does not replace guarded tests on the hardware, the codes in',
  "force and a licensed practitioner's judgement.",
];

it('is laid out on 80 columns as it was found good', () => {
  const text = terminalReport(metRun(), { colour: false, width: 80 });
  expect(text.trimEnd().split('\n')).toEqual(met80);
});

it('is laid out on 100 columns as it was found good', () => {
  const text = terminalReport(sampleRun(), { colour: false, width: 100 });
  expect(text.trimEnd().split('\n')).toEqual(blocked100);
});
