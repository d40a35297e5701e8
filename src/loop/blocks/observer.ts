import type { SettingDescription } from '../../spec/vocabulary.js';
import type { Node } from '../graph.js';
import { LoopError } from '../loop.js';
import type { Term } from '../number_rules.js';
import type { Block, BlockUse, Workshop } from './block.js';
import { steadyGain } from './steady_gain.js';

const states = { of: 'states' };
const measured = { of: 'measured' };

function matrix(
  name: string,
  rows: { of: string },
  columns: { of: string },
  meaning: string,
  entry: 'ratio' | 'product' = 'ratio',
  optional = true,
): SettingDescription {
  return { name, kind: 'matrix', rows, columns, entry, optional, meaning };
}

/**
 * A model of the plant that runs beside it and is corrected by what is measured (Luenberger 1964; Kalman 1960). x̄ is what
 * was predicted for this instant, y what is measured, u what drives the plant from now on and u₁ what drove it up to now, as
 * the sample was taken. Each line of a matrix is one sum from left to right, as in y₁ − c₁₁·x̄₁ − c₁₂·x̄₂:
 *
 *     e = y − C·x̄ − D·u₁
 *     this_sample   x̂ = x̄ + L·e,  predicted next: A·x̂ + B·u
 *     last_sample   x̂ = x̄,        predicted next: A·x̄ + B·u + L·e
 *
 * The signal itself is the first entry of e; the estimates are other signals of the controller, `estimate`.
 */
export const observer: Block = {
  description: {
    key: 'observer',
    rooms: ['controller'],
    takesInput: false,
    takesGain: false,
    settings: [
      {
        name: 'states',
        kind: 'estimates',
        late: true,
        optional: false,
        meaning: 'the signals of this controller that are its estimates, in the order of the matrices',
      },
      { name: 'measured', kind: 'signals', optional: false, meaning: 'what is measured, y' },
      {
        name: 'driven_by',
        kind: 'signals',
        late: true,
        optional: true,
        meaning: 'what drives the plant from this instant to the next, u',
      },
      matrix('state_matrix', states, states, 'A: from one instant to the next', 'ratio', false),
      matrix('input_matrix', states, { of: 'driven_by' }, 'B: what u adds from one instant to the next'),
      matrix('output_matrix', measured, states, 'C: what is measured of the states', 'ratio', false),
      matrix(
        'feedthrough',
        measured,
        { of: 'driven_by' },
        'D: what is measured of u₁, u at the last instant; 0 by default',
      ),
      matrix('gain', states, measured, 'L, for the rule that uses says'),
      matrix(
        'process_covariance',
        states,
        states,
        'in place of a gain: of what disturbs the states at each instant',
        'product',
      ),
      matrix(
        'measurement_covariance',
        measured,
        measured,
        'in place of a gain: of the noise of what is measured',
        'product',
      ),
      {
        name: 'starts_at',
        kind: 'matrix',
        rows: states,
        columns: 'plain',
        entry: 'ratio',
        optional: true,
        meaning: 'x̄ at power-up; 0 by default',
      },
      {
        name: 'uses',
        kind: 'word',
        words: ['this_sample', 'last_sample'],
        optional: false,
        meaning: 'whether the estimates already use what is measured at their own instant',
      },
    ],
    meaning:
      'its value is e = y − C·x̄ − D·u₁ of the first measured; x̂ = x̄ + L·e and next A·x̂ + B·u with this_sample, x̂ = x̄ and next A·x̄ + B·u + L·e with last_sample; each line one sum from left to right',
  },
  keepsRange: false,
  expand: (use, workshop) => {
    const names = use.names('states');
    const model = modelOf(use, names.length, workshop);
    const atOnce = use.word('uses') === 'this_sample';
    const starts = startsOf(use, names.length);
    const predicted: Node[] = names.map((name, row) =>
      workshop.addMemory(`${name} predicted`, () => next(row), starts[row]),
    );
    const { arithmetic } = workshop;
    const drove = model.through
      ? use.signals('driven_by').map((u, at) => workshop.addMemory(`${use.name} driven by ${at + 1}`, u, 0))
      : [];
    const surprise = valuesOf(use, 'measured').map((seen, row) =>
      arithmetic.sum([
        { value: seen },
        ...terms(model.output[row], predicted, true),
        ...terms(model.through?.[row] ?? [], drove, true),
      ]),
    );
    const estimate = predicted.map((value, row) =>
      atOnce ? arithmetic.sum([{ value }, ...terms(model.gain[row], surprise)]) : value,
    );
    workshop.publish(new Map(names.map((name, row) => [name, estimate[row]])));
    return surprise[0];

    function next(row: number): Node {
      return arithmetic.sum([
        ...terms(model.state[row], estimate),
        ...(model.input ? terms(model.input[row], valuesOf(use, 'driven_by')) : []),
        ...(atOnce ? [] : terms(model.gain[row], surprise)),
      ]);
    }
  },
};

function terms(factors: readonly Node[], values: readonly Node[], minus = false): Term[] {
  return factors.map((factor, at) => ({ factor, value: values[at], minus }));
}

function valuesOf(use: BlockUse, name: string): Node[] {
  return use.signals(name).map((signal) => signal());
}

interface Model {
  state: Node[][];
  input: Node[][] | undefined;
  output: Node[][];
  through: Node[][] | undefined;
  gain: Node[][];
}

function modelOf(use: BlockUse, order: number, workshop: Workshop): Model {
  const outputs = use.signals('measured').length;
  const inputs = use.signals('driven_by').length;
  const state = sized(use, 'state_matrix', order, order)!;
  const output = sized(use, 'output_matrix', outputs, order)!;
  const input = inputs > 0 ? sized(use, 'input_matrix', order, inputs) : undefined;
  if (inputs > 0 && !input) fail(use, 'has driven_by and needs an input_matrix');
  if (use.has('feedthrough') && inputs === 0) fail(use, 'has a feedthrough and needs driven_by');
  const through = use.has('feedthrough') ? sized(use, 'feedthrough', outputs, inputs) : undefined;
  const gain = sized(use, 'gain', order, outputs);
  const disturbed = sized(use, 'process_covariance', order, order);
  const noise = sized(use, 'measurement_covariance', outputs, outputs);
  if (gain && (disturbed || noise)) fail(use, 'has both a gain and covariances; expected one of them');
  if (gain) return { state, input, output, through, gain };
  if (!disturbed || !noise) {
    fail(use, 'needs a gain, or process_covariance and measurement_covariance to work it out from');
  }
  return {
    state,
    input,
    output,
    through,
    gain: workedOut(use, { state, output, disturbed, noise }, workshop),
  };
}

function sized(use: BlockUse, name: string, rows: number, columns: number): Node[][] | undefined {
  const found = use.matrix(name, columns);
  if (found && (found.length !== rows || found[0].length !== columns)) {
    fail(use, `has a ${name} of ${found.length} × ${found[0].length}; expected ${rows} × ${columns}`);
  }
  return found;
}

function fail(use: BlockUse, fault: string): never {
  throw new LoopError(`observer '${use.name}' ${fault}`, use.place);
}

function startsOf(use: BlockUse, order: number): number[] {
  const given = use.matrix('starts_at')?.flat();
  if (!given) return Array(order).fill(0);
  const starts = given.flatMap((entry) => (entry.kind === 'number' ? [entry.value] : []));
  if (starts.length === order && given.length === order) return starts;
  return fail(use, `has a starts_at that is no list of ${order}; expected one number for each state`);
}

function workedOut(
  use: BlockUse,
  of: { state: Node[][]; output: Node[][]; disturbed: Node[][]; noise: Node[][] },
  { arithmetic }: Workshop,
): Node[][] {
  const numbers = (name: string, rows: Node[][]): number[][] =>
    rows.map((row) =>
      row.map((entry) =>
        entry.kind === 'number'
          ? entry.value
          : fail(
              use,
              `has a ${name} that changes while it runs, so that no steady gain follows; give a gain`,
            ),
      ),
    );
  const result = steadyGain({
    state: numbers('state_matrix', of.state),
    output: numbers('output_matrix', of.output),
    disturbed: numbers('process_covariance', of.disturbed),
    noise: numbers('measurement_covariance', of.noise),
    uses: use.word('uses') as 'this_sample' | 'last_sample',
  });
  if (result.kind === 'none') fail(use, `has no steady gain: ${result.why}`);
  return result.gain.map((row) => row.map((entry) => arithmetic.number(entry)));
}
