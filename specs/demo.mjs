// Shows what a reviewer would see: the shipped firmware judged, then pull requests with a slip of the pen.
// Ends with status 0 when all come out as they should. Needs no compiler: the images are in git.
import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';

const pawl = fileURLToPath(new URL('../dist/cli/main.js', import.meta.url));
const cwd = fileURLToPath(new URL('..', import.meta.url));

function show(title, expected, ...words) {
  console.log(`\n=== ${title}\n$ pawl ${words.join(' ')}\n`);
  const { status } = spawnSync(process.execPath, [pawl, ...words], { cwd, stdio: 'inherit' });
  console.log(`exit status ${status}`);
  return status === expected;
}

const heliostat = 'specs/heliostat/heliostat.pawl.yaml';
const azimuth = 'specs/heliostat/firmware/azimuth-regressed.elf';
const heating = 'specs/rootzone-heating/rootzone-heating.pawl.yaml';
const rootzone = 'specs/rootzone-heating/firmware/rootzone-regressed.elf';
const belt = 'specs/grain-conveyor/grain-conveyor.pawl.yaml';
const conveyor = 'specs/grain-conveyor/firmware/conveyor-regressed.elf';
const asExpected = [
  show('What the build holds', 0, 'read', heliostat, '--skip-build'),
  show(
    'The shipped firmware: the merge goes through',
    0,
    'check',
    heliostat,
    '--skip-build',
    '--out',
    'out/shipped',
  ),
  show(
    'A pull request whose ki slipped a decimal point: blocked',
    1,
    'check',
    heliostat,
    '--image',
    azimuth,
    '--out',
    'out/regressed',
  ),
  show(
    'A slow loop in Q16.16, its feed-forward in the wrong unit: blocked by one scenario',
    1,
    'check',
    heating,
    '--image',
    rootzone,
    '--out',
    'out/rootzone-regressed',
  ),
  show(
    'Two loops in Q15, a gain whose binary point slipped: blocked, though every margin holds',
    1,
    'check',
    belt,
    '--image',
    conveyor,
    '--out',
    'out/conveyor-regressed',
  ),
];
process.exitCode = asExpected.every(Boolean) ? 0 : 1;
