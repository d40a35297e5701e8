import { columnsOf } from './plain_text.js';

/** Holds a number and its unit together while lines are broken; no text from outside holds it. */
const tie = '\ue000';

/**
 * Text broken into lines of at most `width` columns, at blanks where there are any; every line stands `indent` blanks
 * in, the ones after the first `hanging` more.
 */
export function wrapText(text: string, width: number, indent = 0, hanging = 0): string[] {
  const lines: string[] = [];
  let line = '';
  const room = (): number => Math.max(1, width - indent - (lines.length > 0 ? hanging : 0));
  for (const word of joined(text)
    .split(' ')
    .flatMap((one) => pieces(one, Math.max(1, width - indent - hanging)))) {
    const longer = line === '' ? word : `${line} ${word}`;
    if (columnsOf(longer) <= room()) {
      line = longer;
    } else {
      if (line !== '') lines.push(line);
      line = word;
    }
  }
  lines.push(line);
  return lines.map((one, at) => ' '.repeat(indent + (at > 0 ? hanging : 0)) + one.replaceAll(tie, ' '));
}

/** "25 %", "(191 N*m)" and a quantity at the end stay on one line. */
function joined(text: string): string {
  return text
    .replaceAll(tie, '')
    .replace(/(\d) (?=%)/g, `$1${tie}`)
    .replace(/\((\S+) (\S+)\)/g, `($1${tie}$2)`)
    .replace(/(\d) (\S{1,10})$/, `$1${tie}$2`);
}

/** A word that fits no line, cut into pieces that do. */
function pieces(word: string, most: number): string[] {
  const characters = [...word];
  if (characters.length <= most) return [word];
  const count = Math.ceil(characters.length / most);
  return Array.from({ length: count }, (_, at) => characters.slice(at * most, (at + 1) * most).join(''));
}
