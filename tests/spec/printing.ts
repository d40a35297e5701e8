import type { Syntax } from '../../src/spec/syntax.js';

/** An expression as text, with parentheses around everything that has parts. */
export function printed(syntax: Syntax): string {
  switch (syntax.kind) {
    case 'number':
      return String(syntax.value);
    case 'quantity':
      return `(${syntax.digits} ${syntax.unit.unit.text})`;
    case 'name':
      return syntax.index === undefined ? syntax.name : `${syntax.name}[${syntax.index}]`;
    case 'negate':
      return `(-${printed(syntax.of)})`;
    case 'operation':
      return `(${printed(syntax.left)} ${syntax.operator} ${printed(syntax.right)})`;
    case 'call':
      return `${syntax.name}(${syntax.arguments.map(printed).join(', ')})`;
  }
}
