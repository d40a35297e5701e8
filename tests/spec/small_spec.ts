/** Pieces of a small loop in which single rules can be tried; each replaces the usual piece of its name. */
export interface Pieces {
  constants?: string;
  coefficients?: string;
  parameters?: string;
  inputs?: string;
  plant?: string;
  sensors?: string;
  settings?: string;
  signals?: string;
  actuators?: string;
  inputsOfStep?: string;
  requirements?: string;
  rest?: string;
}

const usual: Required<Pieces> = {
  constants: '',
  coefficients: 'k: k',
  parameters: '',
  inputs: 'goal: { unit: V }',
  plant: 'out: { lag: 10 ms, of: drive, unit: V }',
  sensors: 'seen: { of: out, unit: V }',
  settings: 'every: 1 ms',
  signals: 'command: { value: k*(goal - seen), unit: V }',
  actuators: 'drive: { of: command, unit: V }',
  inputsOfStep: 'goal: { step: 1 V, at: 0.1 s }',
  requirements: '- { name: R, measure: overshoot, of: out, to: goal, in: step, at_most: 10 % }',
  rest: '',
};

/** A spec of fixed lines: constants 4, coefficients 8, parameters 10, inputs 12 and so on when each is one line. */
export function smallSpec(pieces: Pieces = {}): string {
  const piece = { ...usual, ...pieces };
  return [
    'pawl: 1',
    'loop: small',
    'constants:',
    indented(piece.constants, 2),
    'firmware:',
    '  image: a.elf',
    '  coefficients:',
    indented(piece.coefficients, 4),
    'parameters:',
    indented(piece.parameters, 2),
    'inputs:',
    indented(piece.inputs, 2),
    'plant:',
    indented(piece.plant, 2),
    'sensors:',
    indented(piece.sensors, 2),
    'controllers:',
    '  law:',
    indented(piece.settings, 4),
    '    signals:',
    indented(piece.signals, 6),
    'actuators:',
    indented(piece.actuators, 2),
    'scenarios:',
    '  step:',
    '    lasts: 1 s',
    '    inputs:',
    indented(piece.inputsOfStep, 6),
    'requirements:',
    indented(piece.requirements, 2),
    piece.rest,
  ].join('\n');
}

function indented(text: string, by: number): string {
  return text
    .split('\n')
    .map((line) => (line === '' ? '' : ' '.repeat(by) + line))
    .join('\n');
}
