/**
 * Characters that no output may carry as they are: controls, marks that turn the direction of text, line separators,
 * invisible tags, halves of surrogate pairs, and code points that XML 1.0 (5th edition, 2008, production 2) forbids.
 */
const unsafe =
  /[\p{Cc}\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff\ufff9-\ufffb\ufffe\uffff\u{e0000}-\u{e007f}]|\p{Cs}/gu;

/**
 * A text from a spec or an image, made harmless: what would act unseen is shown instead, as a control picture (␀) or
 * as its number (⟨U+202E⟩). Line ends and tabs stay.
 */
export function visible(text: string): string {
  return text
    .replace(/\r\n/g, '\n')
    .replace(unsafe, (character) =>
      character === '\n' || character === '\t' ? character : shown(character),
    );
}

/** The same on one line: line ends and tabs are shown too, or written as `by` says. */
export function oneLine(text: string, by: (character: string) => string = shown): string {
  return text.replace(unsafe, (character) => by(character));
}

/** At most so many characters, the middle left out where it is longer; never cuts a character in two. */
export function shortened(text: string, most: number): string {
  const characters = [...text];
  if (characters.length <= most) return text;
  if (most <= 1) return '…'.slice(0, Math.max(0, most));
  const head = Math.ceil((most - 1) / 2);
  const tail = most - 1 - head;
  return `${characters.slice(0, head).join('')}…${characters.slice(characters.length - tail).join('')}`;
}

/** Number of columns that a text takes on a terminal, where each character takes one. */
export function columnsOf(text: string): number {
  return [...text].length;
}

function shown(character: string): string {
  const code = character.codePointAt(0)!;
  if (code < 0x20) return String.fromCodePoint(0x2400 + code);
  if (code === 0x7f) return '␡';
  return `⟨U+${code.toString(16).toUpperCase().padStart(4, '0')}⟩`;
}
