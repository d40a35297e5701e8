/**
 * Measures how long one coefficient takes out of an image of 100 MB, 80 MB of it debug information, against `readelf
 * --debug-dump=info`, which reads all of it. Run after `npm run build`: `node tests/firmware/speed.mjs`. Ends with status 1
 * when pawl is slower, or takes 200 MB of memory more than Node does for nothing.
 */
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const megabyte = 1e6;
const wanted = { image: 100 * megabyte, debug: 80 * megabyte, extraMemory: 200 * megabyte };
const kinds = 4;

const folder = mkdtempSync(join(tmpdir(), 'pawl-speed-'));
try {
  const image = makeImage();
  report(image, measureReader(image), measureReadelf(image));
} finally {
  rmSync(folder, { recursive: true });
}

/** Static functions and structs only, so that the linker takes the same object many times over. */
function unitSource(kind) {
  const lines = [];
  for (let i = 0; i < 2500; i++) {
    const name = `k${kind}_${i}`;
    lines.push(
      `struct s_${name} { int count_${i}; float gain_${name}; double limit_${i % 50}[${1 + (i % 7)}]; struct { short low, high; } range; };`,
      `static struct s_${name} v_${name} = {${i}, ${i}.5f};`,
      `__attribute__((used)) static int f_${name}(int a, float b) { int left = a + ${i}; float right = b * v_${name}.gain_${name};`,
      `  if (left > 3) { int inner = left * 2; return inner + (int)right; } return left - v_${name}.count_${i}; }`,
    );
  }
  return lines.join('\n');
}

function makeImage() {
  const compile = (name, text) => {
    writeFileSync(join(folder, `${name}.c`), text);
    execFileSync('gcc', ['-g', '-O0', '-ffreestanding', '-fno-pic', '-c', '-o', `${name}.o`, `${name}.c`], {
      cwd: folder,
    });
    return `${name}.o`;
  };
  const padding = `const char padding[${5 * megabyte}] = {1};\n`;
  const wantedSource = `struct gains { float kp, ki; };\nconst struct gains azimuth = {1.25f, 0.5f};\n${padding}void _start(void) {}\n`;
  const main = compile('azimuth', wantedSource);
  const units = Array.from({ length: kinds }, (_, kind) => compile(`unit${kind}`, unitSource(kind)));
  const bytesOf = (object) => debugBytes(join(folder, object));
  const perRound = units.reduce((sum, unit) => sum + bytesOf(unit), 0);
  // The linker merges the texts of all objects.
  const rounds = Math.ceil((1.3 * wanted.debug) / perRound);
  const copies = Array.from({ length: rounds }, () => units).flat();
  const half = Math.floor(copies.length / 2);
  const objects = [...copies.slice(0, half), main, ...copies.slice(half)];
  execFileSync('ld', ['-e', '_start', '-o', 'big.elf', ...objects], { cwd: folder });
  return join(folder, 'big.elf');
}

function debugBytes(path) {
  const table = execFileSync('readelf', ['-S', '-W', path], { encoding: 'latin1', maxBuffer: 1 << 26 });
  let total = 0;
  for (const [, size] of table.matchAll(/ \.debug_\w+ +PROGBITS +[0-9a-f]+ [0-9a-f]+ ([0-9a-f]+)/g))
    total += Number.parseInt(size, 16);
  return total;
}

function measureReader(image) {
  const library = fileURLToPath(new URL('../../dist/firmware/index.js', import.meta.url));
  const code = `
    import { readFileSync } from 'node:fs';
    const own = process.resourceUsage().maxRSS;
    const { openImage, readCoefficient } = await import(${JSON.stringify(library)});
    const { elements } = readCoefficient(openImage(readFileSync(${JSON.stringify(image)}), 'big.elf'), { name: 'kp', at: 'azimuth.kp' });
    console.log(JSON.stringify({ value: elements[0].value, extra: (process.resourceUsage().maxRSS - own) * 1024 }));`;
  const started = performance.now();
  const { stdout, stderr } = spawnSync(process.execPath, ['--input-type=module', '-e', code], {
    encoding: 'utf8',
  });
  const seconds = (performance.now() - started) / 1000;
  if (stdout === '') throw new Error(`the reader failed: ${stderr}`);
  return { ...JSON.parse(stdout), seconds };
}

function measureReadelf(image) {
  const started = performance.now();
  execFileSync('readelf', ['--debug-dump=info', image], { stdio: 'ignore' });
  return (performance.now() - started) / 1000;
}

function report(image, reader, readelfSeconds) {
  const size = statSync(image).size;
  const debug = debugBytes(image);
  const text = (bytes) => `${Math.round(bytes / megabyte)} MB`;
  console.log(`image ${text(size)}, debug information ${text(debug)}, value ${reader.value}`);
  console.log(
    `pawl ${reader.seconds.toFixed(2)} s, readelf ${readelfSeconds.toFixed(2)} s: ratio ${(readelfSeconds / reader.seconds).toFixed(1)}`,
  );
  console.log(`memory over Node's own: ${text(reader.extra)}`);
  const failures = [
    size < wanted.image && `the image has only ${text(size)}`,
    debug < wanted.debug && `the debug information has only ${text(debug)}`,
    reader.value !== 1.25 && `the value is ${reader.value}, expected 1.25`,
    reader.seconds >= readelfSeconds && 'pawl is slower than readelf',
    reader.extra >= wanted.extraMemory && `pawl takes more than ${text(wanted.extraMemory)}`,
  ].filter(Boolean);
  for (const failure of failures) console.error(failure);
  process.exitCode = failures.length > 0 ? 1 : 0;
}
