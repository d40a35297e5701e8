/** The example of the format, as it stands: the linter would lay out a YAML file anew. */
export const heliostat = `pawl: 1                                     # format version
loop: Heliostat azimuth drive

firmware:
  build: [make, -s, -C, firmware]           # optional; an argument list, run without a shell in this file's folder
  image: firmware/azimuth.elf               # paths are relative to this file
  coefficients:                             # symbol, members, [indices]; type and format from the debug information
    kp:          azimuth.gains.kp
    ki:          { at: azimuth.gains.ki, unit: 1/s }
    kd:          { at: azimuth.gains.kd, unit: s }
    rate_corner: { at: azimuth.gains.rate_corner, unit: Hz }
    period:      { at: azimuth.period_us, unit: us }
    notch:       { at: azimuth_notch, format: Q2.14 }     # an array: b0 b1 b2 a1 a2

parameters:                                 # uncertain: a nominal value and bounds, ± spread or from … to
  inertia:   { nominal: 38 kg*m^2,       spread: 20 % }
  friction:  { nominal: 30 N*m*s/rad,    from: 10 N*m*s/rad, to: 90 N*m*s/rad }
  stiction:  { nominal: 0.6 N*m,         from: 0 N*m, to: 1.5 N*m }
  drive:     { nominal: 180 N*m,         spread: 10 % }
  drive_lag: { nominal: 40 ms,           spread: 25 % }

inputs:
  target: { unit: rad }
  gust:   { unit: N*m }

plant:
  torque: { lag: drive_lag, of: duty, gain: drive, unit: N*m }
  speed:  { integral: (torque + gust - friction*speed - stiction*tanh(speed/(0.5 mrad/s))) / inertia, unit: rad/s }
  angle:  { integral: speed, unit: rad }

sensors:
  encoder: { of: angle, filter: 8 ms, quantum: 0.1 mrad, noise: 0.03 mrad, unit: rad }

controllers:
  azimuth:
    every: period                           # sampling period, here read from the build
    delay: 400 us                           # from the sampling instant to when its outputs take effect
    arithmetic: float32                     # how the target computes: float64, float32, float32_fused, or a fixed-point format
    signals:
      error:   { value: target - encoder, unit: rad }
      shaped:  { biquads: notch, of: error, unit: rad }
      command: { pid: { kp: kp, ki: ki, kd: kd, derivative_corner: rate_corner, sum_by: backward,
                        anti_windup: hold_integral }, of: shaped, range: [-1, 1] }

actuators:
  duty: { of: command, resolution: 0.001, range: [-1, 1] }

scenarios:
  slew:                                     # a small step of the sun-tracking target
    lasts: 4 s
    inputs: { target: { step: 50 mrad, at: 0.2 s } }
  squall:
    lasts: 4 s
    inputs: { gust: { pulse: 12 N*m, at: 0.5 s, for: 0.6 s } }

requirements:
  - { name: AZ-1, measure: overshoot,      of: angle, to: target, in: slew, at_most: 25 %,
      reason: The image must stay inside the receiver aperture while slewing. }
  - { name: AZ-2, measure: settling_time,  of: angle, to: target, in: slew, band: 5 %, at_most: 2.5 s }
  - { name: AZ-3, measure: peak_deviation, of: angle, to: target, in: squall, at_most: 30 mrad }
  - { name: AZ-4, measure: saturated_share, of: duty, in: slew, at_most: 15 % }
  - { name: AZ-5, measure: phase_margin,   at: duty, around: { speed: 5 mrad/s }, at_least: 40 deg }
  - { name: AZ-6, measure: gain_margin,    at: duty, around: { speed: 5 mrad/s }, at_least: 6 dB }
  - { name: AZ-7, measure: modulus_margin, at: duty, around: { speed: 5 mrad/s }, at_least: 0.5, holds_for: all }

perturbation:
  plants: 1000                              # independent random plants, besides nominal, single extremes and corners
  seed: 11
  confidence: 95 %

merge:
  reference: ../../reference/latched/heliostat.json
  may_slip: 5 %                             # headroom that a change may cost before it counts as slipped
`;
