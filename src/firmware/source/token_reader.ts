import { FirmwareError, quoted } from '../failure.js';
import type { Token } from './c_token.js';

/** Deeper nesting is no person's source. */
const deepest = 200;

/** Tokens one after the other, with what every parser of them needs. */
export class TokenReader {
  private depth = 0;

  constructor(
    readonly tokens: readonly Token[],
    public position = 0,
    readonly end = tokens.length,
  ) {}

  get atEnd(): boolean {
    return this.position >= this.end;
  }

  /** The text some tokens ahead, empty behind the end. */
  peek(ahead = 0): string {
    const at = this.position + ahead;
    return at < this.end ? this.tokens[at].text : '';
  }

  /** The token that comes next. @throws FirmwareError at the end */
  token(): Token {
    if (this.atEnd) throw this.failure('the source ends too early');
    return this.tokens[this.position];
  }

  /** Takes the next token if it has this text. */
  accept(text: string): boolean {
    if (this.peek() !== text) return false;
    this.position++;
    return true;
  }

  /** Takes the next token, which must have this text. @throws FirmwareError otherwise */
  expect(text: string): void {
    if (!this.accept(text))
      throw this.failure(`expected ${quoted(text)}, found ${quoted(this.peek() || 'the end')}`);
  }

  /** An error at the next token. */
  failure(trouble: string): FirmwareError {
    const token = this.tokens[Math.min(this.position, this.end - 1)];
    return new FirmwareError('unsupported', `${token ? `${token.file}:${token.line}: ` : ''}${trouble}`);
  }

  /** Runs a rule that may call itself, under a limit of depth. */
  nested<T>(rule: () => T): T {
    if (++this.depth > deepest) throw this.failure(`nesting deeper than ${deepest}`);
    try {
      return rule();
    } finally {
      this.depth--;
    }
  }

  /** Moves behind the bracket that closes the one which comes next. */
  passBrackets(): void {
    let open = 0;
    do {
      const { text } = this.token();
      if (text === '(' || text === '{' || text === '[') open++;
      if (text === ')' || text === '}' || text === ']') open--;
      this.position++;
    } while (open > 0);
  }
}
