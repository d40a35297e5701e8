// Shows what a reviewer would see: the shipped firmware judged, then a pull request that slipped a decimal point.
// Ends with status 0 when both come out as they should. Needs no compiler: the images are in git.
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

const spec = 'specs/heliostat/heliostat.pawl.yaml';
const regressed = 'specs/heliostat/firmware/azimuth-regressed.elf';
const asExpected = [
  show('What the build holds', 0, 'read', spec, '--skip-build'),
  show('The shipped firmware: the merge goes through', 0, 'check', spec, '--skip-build', '--out', 'out/shipped'),
  show('A pull request whose ki slipped a decimal point: blocked', 1, 'check', spec, '--image', regressed, '--out', 'out/regressed'),
];
process.exitCode = asExpected.every(Boolean) ? 0 : 1;
