import type { Expression, Place } from './spec.js';

/** A stretch of time in s, counted from the time at which the statement around it is looked at; `to` is open without a value. */
export interface StatementWindow {
  from: number;
  to: number | undefined;
}

/** What a requirement says of signals over time, checked; SI. */
export type Statement =
  /**
   * Holds while `margin`, a combination of signals, is not below zero; `scale` is what counts as one of headroom. `asWritten` is
   * for people.
   */
  | { kind: 'comparison'; margin: Expression; scale: number; asWritten: string; place: Place }
  | ({ kind: 'throughout' | 'at_some_time'; that: Statement; place: Place } & StatementWindow)
  /** `holds` is so from now on until, within the window, `upTo` is so. */
  | ({ kind: 'holds_up_to'; holds: Statement; upTo: Statement; place: Place } & StatementWindow)
  | { kind: 'when'; when: Statement; holds: Statement; place: Place }
  | { kind: 'all_of' | 'one_of'; statements: Statement[]; place: Place };

/** One corner of a bound that is straight between its corners: time of the scenario (s) and value (SI). */
export interface BoundPoint {
  time: number;
  value: number;
}

/** The names of all signals in a statement. */
export function signalsOfStatement(statement: Statement): string[] {
  switch (statement.kind) {
    case 'comparison':
      return signalsOfExpression(statement.margin);
    case 'throughout':
    case 'at_some_time':
      return signalsOfStatement(statement.that);
    case 'holds_up_to':
      return [...signalsOfStatement(statement.holds), ...signalsOfStatement(statement.upTo)];
    case 'when':
      return [...signalsOfStatement(statement.when), ...signalsOfStatement(statement.holds)];
    case 'all_of':
    case 'one_of':
      return statement.statements.flatMap(signalsOfStatement);
  }
}

/** The names of all signals in an expression; parameters are none. */
export function signalsOfExpression(of: Expression): string[] {
  switch (of.kind) {
    case 'number':
      return [];
    case 'name':
      return of.role === 'parameter' ? [] : [of.name];
    case 'negate':
    case 'before':
      return signalsOfExpression(of.of);
    case 'operation':
      return [...signalsOfExpression(of.left), ...signalsOfExpression(of.right)];
    case 'call':
      return of.arguments.flatMap(signalsOfExpression);
  }
}
