/** Builtin types of the Itanium C++ ABI, section 5.1.5.2. */
const builtins: Record<string, string> = {
  v: 'void',
  b: 'bool',
  c: 'char',
  a: 'signed char',
  h: 'unsigned char',
  s: 'short',
  t: 'unsigned short',
  i: 'int',
  j: 'unsigned int',
  l: 'long',
  m: 'unsigned long',
  x: 'long long',
  y: 'unsigned long long',
  f: 'float',
  d: 'double',
  w: 'wchar_t',
};

const standard: Record<string, string[]> = { St: ['std'], Sa: ['std', 'allocator'], Ss: ['std', 'string'] };
/** Longer names, or deeper ones, are damage. */
const longest = 4096;
const deepest = 64;

/**
 * The parts of a mangled data name, outermost first: namespaces, classes, the function around it, the name itself (Itanium C++ ABI,
 * section 5.1). Undefined for what is no mangled data name, or uses parts of the ABI that data hardly needs.
 */
export function demangledData(symbol: string): string[] | undefined {
  if (!symbol.startsWith('_Z') || symbol.length > longest) return undefined;
  const reader = new NameReader(symbol);
  try {
    const parts = reader.dataName();
    return reader.atEnd ? parts : undefined;
  } catch (error) {
    if (error instanceof NotUnderstood) return undefined;
    throw error;
  }
}

class NotUnderstood extends Error {}

class NameReader {
  private position = 2;
  private depth = 0;
  private readonly substitutions: string[][] = [];

  constructor(private readonly text: string) {}

  /** Whether all is read, but for a compiler's suffix such as `.lto_priv.0`. */
  get atEnd(): boolean {
    return this.position === this.text.length || this.text[this.position] === '.';
  }

  dataName(): string[] {
    if (!this.accept('Z')) return this.name();
    // A static variable of a function: the function with its parameters, then the variable.
    const around = this.name();
    while (!this.accept('E')) this.type();
    const inner = this.name();
    if (this.accept('_')) this.digits();
    return [...around, ...inner];
  }

  private accept(text: string): boolean {
    if (!this.text.startsWith(text, this.position)) return false;
    this.position += text.length;
    return true;
  }

  private name(): string[] {
    if (this.depth++ > deepest) throw new NotUnderstood();
    const parts = this.accept('N') ? this.nested() : this.unnested();
    this.depth--;
    return parts;
  }

  private unnested(): string[] {
    const start = this.accept('St') ? ['std'] : [];
    const known = start.length === 0 && this.text[this.position] === 'S' ? this.substitution() : undefined;
    const parts = known ?? [...start, this.sourceName()];
    if (this.text[this.position] !== 'I') return parts;
    if (!known) this.substitutions.push(parts);
    return this.withArguments(parts);
  }

  private nested(): string[] {
    while (this.accept('K') || this.accept('V') || this.accept('r'));
    let parts: string[] = [];
    while (!this.accept('E')) {
      const next = this.text[this.position];
      if (next === 'S') parts = this.substitution();
      else if (next === 'I') {
        parts = this.withArguments(parts);
        this.substitutions.push(parts);
      } else {
        parts = [...parts, this.sourceName()];
        if (this.text[this.position] !== 'E') this.substitutions.push(parts);
      }
    }
    return parts.filter((part) => !part.startsWith('_GLOBAL__N'));
  }

  private withArguments(parts: string[]): string[] {
    const list: string[] = [];
    if (!this.accept('I')) throw new NotUnderstood();
    while (!this.accept('E')) list.push(this.text[this.position] === 'L' ? this.literal() : this.type());
    return [...parts.slice(0, -1), `${parts.at(-1)}<${list.join(', ')}>`];
  }

  private sourceName(): string {
    this.accept('L');
    const length = this.digits();
    const name = this.text.slice(this.position, this.position + length);
    if (length === 0 || name.length < length) throw new NotUnderstood();
    this.position += length;
    // An ABI tag is no part of the written name.
    while (this.accept('B')) {
      const tagLength = this.digits();
      this.position += tagLength;
    }
    return name;
  }

  private digits(): number {
    const found = /^\d{1,4}/.exec(this.text.slice(this.position, this.position + 5));
    if (!found) return 0;
    this.position += found[0].length;
    return Number(found[0]);
  }

  private literal(): string {
    this.position++;
    const type = this.type();
    const found = /^(n?)(\d+)E/.exec(this.text.slice(this.position));
    if (!found) throw new NotUnderstood();
    this.position += found[0].length;
    if (type === 'bool') return found[2] === '0' ? 'false' : 'true';
    const suffix =
      type === 'unsigned int' ? 'u' : type === 'unsigned long' ? 'ul' : type === 'long' ? 'l' : '';
    return `${found[1] ? '-' : ''}${found[2]}${suffix}`;
  }

  private type(): string {
    if (this.depth++ > deepest) throw new NotUnderstood();
    const code = this.text[this.position];
    const builtin = code === undefined ? undefined : builtins[code];
    let type: string;
    if (builtin) {
      this.position++;
      type = builtin;
    } else if (code === 'P' || code === 'R' || code === 'K') {
      this.position++;
      const inner = this.type();
      type = code === 'K' ? `${inner} const` : `${inner} ${code === 'P' ? '*' : '&'}`;
      this.substitutions.push([type]);
    } else {
      const isKnown = code === 'S' && this.text[this.position + 1] !== 't';
      const parts = this.name();
      if (!isKnown || parts.at(-1)?.endsWith('>')) this.substitutions.push(parts);
      type = parts.join('::');
    }
    this.depth--;
    return type;
  }

  private substitution(): string[] {
    const two = this.text.slice(this.position, this.position + 2);
    if (Object.hasOwn(standard, two)) {
      this.position += 2;
      return standard[two];
    }
    const found = /^S([0-9A-Z]{0,3})_/.exec(this.text.slice(this.position, this.position + 6));
    const index = !found ? -1 : found[1] === '' ? 0 : Number.parseInt(found[1], 36) + 1;
    const parts = this.substitutions[index];
    if (!found || !parts) throw new NotUnderstood();
    this.position += found[0].length;
    return parts;
  }
}
