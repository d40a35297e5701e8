import { execFileSync } from 'node:child_process';

/** Builds the package once before the suite, so that whole-command tests run what a user runs. */
export default function buildOnce(): void {
  execFileSync('npm', ['run', '--silent', 'build'], { stdio: 'inherit' });
}
