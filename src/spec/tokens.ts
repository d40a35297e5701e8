/** A word of an expression; `at` is its index in the text. */
export interface Token {
  kind: 'number' | 'name' | 'symbol' | 'end';
  text: string;
  at: number;
}

/** A fault in the text of an expression. */
export interface SyntaxFault {
  kind: 'fault';
  message: string;
  at: number;
}

const patterns: readonly [Token['kind'], RegExp][] = [
  ['number', /(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?/y],
  ['name', /[A-Za-z_µμΩ°%][A-Za-z0-9_µμΩ°%]*/y],
  ['symbol', /<=|>=|==|!=|[-+*/^<>()[\],]/y],
];

const mostTokens = 2000;

/** Splits an expression into numbers, names (units too) and symbols; the last token is the end. */
export function tokensOf(text: string): Token[] | SyntaxFault {
  const tokens: Token[] = [];
  let at = 0;
  for (;;) {
    while (/\s/.test(text[at] ?? '')) at += 1;
    if (at >= text.length) break;
    const token = tokenAt(text, at);
    if (token === undefined) return { kind: 'fault', message: unexpected(text, at), at };
    tokens.push(token);
    at += token.text.length;
    if (tokens.length > mostTokens) {
      return {
        kind: 'fault',
        message: `an expression of more than ${mostTokens} words; split it into signals`,
        at,
      };
    }
  }
  return [...tokens, { kind: 'end', text: '', at: text.length }];
}

function tokenAt(text: string, at: number): Token | undefined {
  for (const [kind, pattern] of patterns) {
    pattern.lastIndex = at;
    const found = pattern.exec(text);
    if (found !== null) return { kind, text: found[0], at };
  }
  return undefined;
}

function unexpected(text: string, at: number): string {
  const character = String.fromCodePoint(text.codePointAt(at)!);
  const cure: Record<string, string> = {
    '=': '; equality is written ==',
    '!': '; inequality is written !=',
    '−': '; the minus sign is the plain -',
    '·': '; a product is written *',
    '×': '; a product is written *',
    '&': '; a product of comparisons holds when both hold',
    '|': '; the max of two comparisons holds when one holds',
    '?': '; a choice is written if(condition, a, b)',
  };
  return `unexpected \`${character}\` in an expression${cure[character] ?? ''}`;
}
