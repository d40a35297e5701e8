/** What a pass is worth, in plain words; stands at the foot of every report. */
export const caution =
  'A pass is evidence about a model. It does not replace guarded tests on the hardware, the codes in force ' +
  "and a licensed practitioner's judgement.";
