import type { Example } from './example.js';

/** Blocks of the plant. */
export const plantBlocks: readonly Example[] = [
  {
    of: 'value',
    room: 'plant',
    shown: 'plant:\n  heat: { value: voltage^2/(23 ohm), unit: W }',
    hidden: 'inputs: { voltage: { unit: V } }',
    when: { voltage: '{ step: 230 V, at: 0 s }' },
    outcomes: [{ signal: 'heat', at: '1 s', unit: 'W', formula: '230^2/23' }],
  },
  {
    of: 'integral',
    shown: 'plant:\n  speed: { integral: torque/(38 kg*m^2), unit: rad/s }',
    hidden: 'inputs: { torque: { unit: N*m } }',
    when: { torque: '{ step: 19 N*m, at: 0 s }' },
    outcomes: [{ signal: 'speed', at: '3 s', unit: 'rad/s', formula: '19/38·3' }],
  },
  {
    of: 'integral',
    shows: 'a valve stem between its stops',
    shown: 'plant:\n  stem: { integral: { integral: stroke, low_stop: 0 mm, high_stop: 25 mm }, unit: mm }',
    hidden: 'inputs: { stroke: { unit: mm/s } }',
    when: { stroke: '[{ step: 2 mm/s, at: 0 s }, { step: -4 mm/s, at: 20 s }]' },
    outcomes: [
      { signal: 'stem', at: '10 s', unit: 'mm', formula: '2·10' },
      { signal: 'stem', at: '20 s', unit: 'mm', formula: '25', why: 'not 40: the stop' },
      { signal: 'stem', at: '25 s', unit: 'mm', formula: '25 − 2·5', why: 'it leaves the stop at once' },
    ],
  },
  {
    of: 'integral',
    shows: 'the load in a tipping weigher, which empties at 20 kg down to 0.5 kg',
    shown:
      'plant:\n  load: { integral: { integral: flow, reset_when: load >= (20 kg), reset_to: 0.5 kg }, unit: kg }',
    hidden: 'inputs: { flow: { unit: kg/s } }',
    when: { flow: '{ step: 4 kg/s, at: 0 s }' },
    outcomes: [{ signal: 'load', at: '8 s', unit: 'kg', formula: '0.5 + 4·(8 − 20/4)' }],
  },
  {
    of: 'lag',
    shown: 'plant:\n  torque: { lag: 40 ms, of: duty, gain: 180 N*m, unit: N*m }',
    hidden: 'inputs: { duty: {} }',
    when: { duty: '{ step: 1, at: 0 s }' },
    outcomes: [{ signal: 'torque', at: '40 ms', unit: 'N*m', formula: '180·(1 − e^(−1))' }],
  },
  {
    of: 'second_order_lag',
    shown: 'plant:\n  belt: { second_order_lag: { corner: 10 rad/s, damping: 0.6 }, of: drum, unit: m/s }',
    hidden: 'inputs: { drum: { unit: m/s } }',
    when: { drum: '{ step: 2 m/s, at: 0 s }' },
    outcomes: [
      {
        signal: 'belt',
        at: '250 ms',
        unit: 'm/s',
        formula: '2·(1 − e^(−0.6·2.5)·(cos(0.8·2.5) + 0.6/0.8·sin(0.8·2.5)))',
        why: 'ω·t = 2.5, √(1 − ζ²) = 0.8',
      },
    ],
  },
  {
    of: 'lead_lag',
    room: 'plant',
    shown: 'plant:\n  seen: { lead_lag: { lead: 6 s, lag: 2 s }, of: wall, unit: K }',
    hidden: 'inputs: { wall: { unit: K } }',
    when: { wall: '{ step: 5 K, at: 0 s }' },
    outcomes: [
      { signal: 'seen', at: '0 s', unit: 'K', formula: '5·6/2', why: 'the lead over the lag' },
      { signal: 'seen', at: '2 s', unit: 'K', formula: '5·(1 + (6/2 − 1)·e^(−1))' },
    ],
  },
  {
    of: 'transfer_function',
    room: 'plant',
    shown:
      'plant:\n  flow: { transfer_function: { numerator: [6], denominator: [1, 5, 6] }, of: valve, gain: 8 L/s, unit: L/s }',
    hidden: 'inputs: { valve: {} }',
    when: { valve: '{ step: 0.5, at: 0 s }' },
    outcomes: [
      {
        signal: 'flow',
        at: '1 s',
        unit: 'L/s',
        formula: '4·(1 − 3·e^(−2) + 2·e^(−3))',
        why: 'partial fractions of 6/(s·(s + 2)·(s + 3))',
      },
    ],
  },
  {
    of: 'transfer_function',
    room: 'plant',
    shows: 'the same poles, with a zero',
    shown:
      'plant:\n  flow: { transfer_function: { zeros: [[-6, 0]], poles: [[-2, 0], [-3, 0]] }, of: valve, gain: 8 L/s, unit: L/s }',
    hidden: 'inputs: { valve: {} }',
    when: { valve: '{ step: 0.5, at: 0 s }' },
    outcomes: [
      {
        signal: 'flow',
        at: '1 s',
        unit: 'L/s',
        formula: '4·(1 − 2·e^(−2) + e^(−3))',
        why: 'partial fractions of (s + 6)/(s·(s + 2)·(s + 3))',
      },
    ],
  },
  {
    of: 'state_equations',
    shows: 'half the heat comes at once, the rest through two walls of 5 s and 20 s',
    shown: `plant:
  heat:
    state_equations: { state_matrix: [[-0.2, 0], [0, -0.05]], input_matrix: [0.2, 0.05],
                       output_matrix: [0.3, 0.2], feedthrough: 0.5 }
    of: burner
    unit: kW`,
    hidden: 'inputs: { burner: { unit: kW } }',
    when: { burner: '{ step: 10 kW, at: 0 s }' },
    outcomes: [
      {
        signal: 'heat',
        at: '10 s',
        unit: 'kW',
        formula: '10·(0.5 + 0.3·(1 − e^(−10/5)) + 0.2·(1 − e^(−10/20)))',
      },
    ],
  },
  {
    of: 'dead_time',
    shown: 'plant:\n  outlet: { dead_time: 8 s, of: inlet, unit: K }',
    hidden: 'inputs: { inlet: { unit: K } }',
    when: { inlet: '{ ramp: 0.5 K/s, at: 0 s }' },
    outcomes: [
      { signal: 'outlet', at: '8 s', unit: 'K', formula: '0' },
      { signal: 'outlet', at: '20 s', unit: 'K', formula: '0.5·(20 − 8)' },
    ],
  },
  {
    of: 'dead_band',
    room: 'plant',
    shown: 'plant:\n  flow: { dead_band: 0.4 V, of: coil, unit: V }',
    hidden: 'inputs: { coil: { unit: V } }',
    when: { coil: '[{ step: 2 V, at: 0 s }, { step: -2.3 V, at: 1 s }, { step: -0.7 V, at: 2 s }]' },
    outcomes: [
      { signal: 'flow', at: '0.5 s', unit: 'V', formula: '2 − 0.4' },
      { signal: 'flow', at: '1.5 s', unit: 'V', formula: '0', why: 'the coil is at −0.3 V' },
      { signal: 'flow', at: '2.5 s', unit: 'V', formula: '−1 + 0.4' },
    ],
  },
  {
    of: 'backlash',
    shown: 'plant:\n  mirror: { backlash: 4 mrad, of: wheel, unit: mrad }',
    hidden: 'inputs: { wheel: { unit: mrad } }',
    when: { wheel: '[{ ramp: 1 mrad/s, at: 0 s }, { ramp: -2 mrad/s, at: 10 s }]' },
    outcomes: [
      { signal: 'mirror', at: '10 s', unit: 'mrad', formula: '10 − 4/2' },
      {
        signal: 'mirror',
        at: '13 s',
        unit: 'mrad',
        formula: '10 − 4/2',
        why: 'the gap: the wheel is back at 7',
      },
      { signal: 'mirror', at: '18 s', unit: 'mrad', formula: '10 − 8 + 4/2' },
    ],
  },
  {
    of: 'hysteresis',
    room: 'plant',
    shown:
      'plant:\n  burner: { hysteresis: { on_above: 2 K, off_below: -1 K, on: 3 kW, off: 0.2 kW, starts_on: 1 }, of: cold, unit: kW }',
    hidden: 'inputs: { cold: { unit: K } }',
    when: { cold: '{ recorded: [[0 s, 0 K], [10 s, -5 K], [30 s, 5 K]], at: 0 s }' },
    outcomes: [
      { signal: 'burner', at: '1.9 s', unit: 'kW', formula: '3', why: 'cold is at −0.95 K' },
      { signal: 'burner', at: '2.1 s', unit: 'kW', formula: '0.2', why: 'below −1 K since 2 s' },
      { signal: 'burner', at: '23.9 s', unit: 'kW', formula: '0.2', why: 'cold is at 1.95 K' },
      { signal: 'burner', at: '24.1 s', unit: 'kW', formula: '3', why: 'above 2 K since 24 s' },
    ],
  },
  {
    of: 'friction',
    shown: `plant:
  drag: { friction: { viscous: 20 N*s/m, coulomb: 40 N, static: 60 N, stribeck_speed: 0.05 m/s,
                      smoothing_speed: 1 mm/s }, of: belt, unit: N }`,
    hidden: 'inputs: { belt: { unit: m/s } }',
    when: { belt: '[{ step: 0.05 m/s, at: 0 s }, { step: 0.95 m/s, at: 2 s }]' },
    outcomes: [
      { signal: 'drag', at: '1 s', unit: 'N', formula: '40 + 20·e^(−1) + 20·0.05', why: 'at 0.05 m/s' },
      { signal: 'drag', at: '3 s', unit: 'N', formula: '40 + 20·1', why: 'at 1 m/s the static part is gone' },
    ],
  },
  {
    of: 'table',
    room: 'plant',
    shows: 'a valve',
    shown:
      'plant:\n  flow: { table: { points: [0, 0.4, 1], values: [0 L/s, 1 L/s, 4 L/s] }, of: opening, unit: L/s }',
    hidden: 'inputs: { opening: {} }',
    when: { opening: '[{ step: 0.7, at: 0 s }, { step: 0.5, at: 1 s }]' },
    outcomes: [
      { signal: 'flow', at: '0.5 s', unit: 'L/s', formula: '1 + (4 − 1)·(0.7 − 0.4)/(1 − 0.4)' },
      { signal: 'flow', at: '1.5 s', unit: 'L/s', formula: '4', why: 'held at the end of the table' },
    ],
  },
  {
    of: 'table',
    room: 'plant',
    shows: 'a map of two signals, such as that of a pump: a row for each speed, along the head',
    shown: `plant:
  flow: { table: { points: [1000 rpm, 3000 rpm], values: [[5 L/s, 1 L/s], [9 L/s, 7 L/s]],
                   second: head, second_points: [0 m, 10 m] }, of: speed, unit: L/s }`,
    hidden: 'inputs: { speed: { unit: rpm }, head: { unit: m } }',
    when: { speed: '{ step: 1500 rpm, at: 0 s }', head: '{ step: 4 m, at: 0 s }' },
    outcomes: [
      {
        signal: 'flow',
        at: '1 s',
        unit: 'L/s',
        formula: '6 + (2.5 − 6)·4/10',
        why: 'along the speed 5 + 4/4 = 6 and 1 + 6/4 = 2.5',
      },
    ],
  },
  {
    of: 'table',
    room: 'plant',
    shows: 'the cubic, whose slopes in and beside a flat part are 0',
    shown:
      'plant:\n  lift: { table: { points: [0, 1, 2, 3], values: [0 mm, 0 mm, 8 mm, 8 mm], between: cubic }, of: cam, unit: mm }',
    hidden: 'inputs: { cam: {} }',
    when: { cam: '{ step: 1.25, at: 0 s }' },
    outcomes: [
      {
        signal: 'lift',
        at: '1 s',
        unit: 'mm',
        formula: '8·(3·0.25^2 − 2·0.25^3)',
        why: 'Hermite polynomial with both slopes 0',
      },
    ],
  },
];
