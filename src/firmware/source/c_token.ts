import { FirmwareError, quoted } from '../failure.js';

/** A word, number, text or operator of preprocessed C or C++. */
export interface Token {
  kind: 'word' | 'number' | 'text' | 'operator';
  text: string;
  file: string;
  line: number;
}

const pattern =
  /\s+|([A-Za-z_$][\w$]*)|(\.?\d(?:[eEpP][+-]|[\w.']|)*)|("(?:[^"\\\n]|\\.)*"|'(?:[^'\\\n]|\\.)*')|(<<=|>>=|\.\.\.|->|::|<<|>>|<=|>=|==|!=|&&|\|\||[-+*/%&|^]=|\+\+|--|##|.)/y;

/** Takes text apart; line markers of the preprocessor set the place. */
export function tokensOf(text: string, file: string): Token[] {
  const tokens: Token[] = [];
  let place = { file, line: 0 };
  for (const line of text.split('\n')) {
    place = { file: place.file, line: place.line + 1 };
    if (line.startsWith('#')) {
      const marker = markerOf(line);
      if (marker) place = { file: marker.file, line: marker.line - 1 };
      continue;
    }
    addTokens(line, place, tokens);
  }
  return tokens;
}

/** What a line marker such as `# 12 "gains.h" 2` says: the next line's place. */
export function markerOf(line: string): { file: string; line: number; isSystem: boolean } | undefined {
  const found = /^#(?:line)?\s+(\d+)\s+"((?:[^"\\]|\\.)*)"((?:\s+\d)*)/.exec(line);
  if (!found) return undefined;
  return { line: Number(found[1]), file: found[2].replace(/\\(.)/g, '$1'), isSystem: /\b3\b/.test(found[3]) };
}

function addTokens(line: string, place: { file: string; line: number }, tokens: Token[]): void {
  pattern.lastIndex = 0;
  while (pattern.lastIndex < line.length) {
    const found = pattern.exec(line);
    if (!found)
      throw new FirmwareError(
        'malformed_image',
        `${place.file}:${place.line}: cannot read ${quoted(line.slice(0, 40))}`,
      );
    const [text, word, number, literal] = found;
    const kind = word ? 'word' : number ? 'number' : literal ? 'text' : 'operator';
    if (text.trim() !== '') tokens.push({ kind, text, ...place });
  }
}
