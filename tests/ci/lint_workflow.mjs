// Reads a workflow or an action from standard input as GitHub's own language service does, and prints what is wrong with it.
// A program of its own: the service imports JSON in a way that Node refuses without the hook below.
import { register } from 'node:module';
import { text } from 'node:stream/consumers';

const hook = `
import { readFile } from 'node:fs/promises';
import { fileURLToPath } from 'node:url';
export async function load(url, context, next) {
  if (!url.endsWith('.json')) return next(url, context);
  const source = 'export default ' + await readFile(fileURLToPath(url), 'utf8');
  return { format: 'module', source, shortCircuit: true };
}`;
register(`data:text/javascript,${encodeURIComponent(hook)}`);

const { validate } = await import('@actions/languageservice');
const [path] = process.argv.slice(2);
const content = await text(process.stdin);
const lines = content.split('\n');
const found = await validate({
  uri: `file:///repository/${path}`,
  languageId: 'yaml',
  version: 1,
  lineCount: lines.length,
  getText: () => content,
});
for (const { message, range } of found) console.log(`${path}:${range.start.line + 1}: ${message}`);
