import type { JudgedPlant } from '../verdict/run.js';
import { formatNumber, inWrittenUnit, unitText } from './format_value.js';
import { oneLine } from './plain_text.js';
import { moveInWords } from './plant_in_words.js';
import { textTable } from './text_table.js';

/** The parameters of a plant, one row each: name, value, unit, nominal, and the way gone to the bound in per cent. */
export function parameterRows({ parameters }: Pick<JudgedPlant, 'parameters'>): string[][] {
  return parameters.map(({ name, value, unit, nominal, moved, derived }) => {
    const written = { unit, inDecibels: false };
    return [
      oneLine(name),
      formatNumber(inWrittenUnit(value, written), 6),
      unitText(written),
      formatNumber(inWrittenUnit(nominal, written), 6),
      derived ? 'follows from the others' : moveInWords(moved),
    ];
  });
}

/** The headings of the rows. */
export const parameterHeadings = ['parameter', 'value', 'unit', 'nominal', 'moved'];

/** The parameters of a plant as a table of plain text; empty where there are none. */
export function parameterTable(plant: Pick<JudgedPlant, 'parameters'>): string {
  if (plant.parameters.length === 0) return '';
  return textTable([parameterHeadings, ...parameterRows(plant)], [1, 3]);
}
