import type { Statement, StatementWindow } from '../spec/statement.js';
import { formatNumber } from './format_value.js';
import { oneLine } from './plain_text.js';

/**
 * What a requirement says of signals over time, as a person would: "from 1.5 s on throughout: angle < 60 mrad". Times within
 * another statement count from the time at which that is looked at.
 */
export function statementInWords(statement: Statement): string {
  switch (statement.kind) {
    case 'comparison':
      return oneLine(statement.asWritten);
    case 'throughout':
      return `${windowInWords(statement)}throughout: ${inner(statement.that)}`;
    case 'at_some_time':
      return `${windowInWords(statement)}at some time: ${inner(statement.that)}`;
    case 'holds_up_to':
      return `${inner(statement.holds)}, up to a time ${windowInWords(statement)}at which ${inner(statement.upTo)}`;
    case 'when':
      return `when ${inner(statement.when)}, then ${inner(statement.holds)}`;
    case 'all_of':
      return listed(statement.statements, 'and');
    case 'one_of':
      return listed(statement.statements, 'or');
  }
}

/** A part of a statement: in parentheses where it has parts of its own. */
function inner(statement: Statement): string {
  const words = statementInWords(statement);
  return statement.kind === 'comparison' ? words : `(${words})`;
}

function listed(statements: readonly Statement[], word: string): string {
  return statements.map(inner).join(` ${word} `);
}

function windowInWords({ from, to }: StatementWindow): string {
  if (to === undefined) return from === 0 ? '' : `from ${formatNumber(from)} s on `;
  return `from ${formatNumber(from)} to ${formatNumber(to)} s `;
}
