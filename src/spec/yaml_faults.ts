import type { YAMLError } from 'yaml';

/** A fault of the YAML text. `fatal`: what follows it cannot be relied on. */
export interface YamlFault {
  offset: number;
  message: string;
  fatal: boolean;
}

/**
 * The faults of a YAML text in words that help. One mistake makes the parser stumble many times after it, so of the
 * fatal ones the first is told; tabs and duplicate keys are told each by itself.
 */
export function yamlFaults(errors: readonly YAMLError[], text: string): YamlFault[] {
  const tab = tabFault(text);
  const ordered = [...errors].sort((a, b) => a.pos[0] - b.pos[0]);
  const duplicates = ordered
    .filter(({ code }) => code === 'DUPLICATE_KEY')
    .map(({ pos }) => ({ offset: pos[0], message: duplicate(text, pos[0]), fatal: false }));
  const first = ordered.find(({ code }) => code !== 'DUPLICATE_KEY');
  if (first === undefined) return duplicates;
  if (tab !== undefined) return [...duplicates.filter(({ offset }) => offset < tab.offset), tab];
  return [
    ...duplicates.filter(({ offset }) => offset < first.pos[0]),
    { offset: first.pos[0], message: words(first, text), fatal: true },
  ];
}

/** The first tab that indents a line, with the number of further ones. */
function tabFault(text: string): YamlFault | undefined {
  const found = [...text.matchAll(/^ *\t/gm)];
  if (found.length === 0) return undefined;
  const more = found.length > 1 ? `, and ${found.length - 1} more` : '';
  const offset = found[0].index + found[0][0].length - 1;
  return {
    offset,
    message: `a tab indents this line${more}; YAML is indented with spaces only`,
    fatal: true,
  };
}

function duplicate(text: string, offset: number): string {
  const key = /^[^\s:,{}]+/.exec(text.slice(offset, offset + 200))?.[0] ?? '';
  return `the key \`${key}\` stands here a second time; each key stands once`;
}

function words(error: YAMLError, text: string): string {
  const [offset] = error.pos;
  if (error.code === 'UNEXPECTED_TOKEN' && text[offset] === '[') {
    return 'a [ in the middle of a value; inside { } an expression with a comma or a [ needs quotes, as in value: "table[2]"';
  }
  if (error.code === 'MULTIPLE_DOCS') return 'a second YAML document starts here; one file is one spec';
  if (error.code === 'MULTILINE_IMPLICIT_KEY' || error.code === 'BLOCK_AS_IMPLICIT_KEY') {
    return 'this is not YAML: a key with a colon was expected, or a value needs quotes';
  }
  const shown = text.slice(offset, offset + 20).split('\n')[0];
  const near = shown.trim() === '' ? '' : `, near \`${shown}\``;
  return `this is not YAML: ${error.message.charAt(0).toLowerCase()}${error.message.slice(1)}${near}`;
}
