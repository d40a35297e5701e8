import { styleText } from 'node:util';
import type { Verdict } from '../verdict/run.js';

/** What a piece of text is, for its colour. */
export type Tone = Verdict['kind'] | 'strong' | 'quiet';

/** Paints a text in the colour of its tone. */
export type Painter = (tone: Tone, text: string) => string;

/** White on petrol #0F6472, on brick #A4452C and on slate #4A5560: readable on dark and light terminals alike. */
const grounds: Readonly<Record<Verdict['kind'], string>> = {
  met: '15;100;114',
  slipped: '164;69;44',
  broken: '164;69;44',
  unjudged: '74;85;96',
};

/** A painter in 24-bit colour (ISO/IEC 8613-6), or one that leaves every text as it is. */
export function painter(colour: boolean): Painter {
  if (!colour) return (_, text) => text;
  return (tone, text) => {
    if (tone === 'strong') return styleText('bold', text, { validateStream: false });
    if (tone === 'quiet') return styleText('dim', text, { validateStream: false });
    return `\u001b[38;2;255;255;255;48;2;${grounds[tone]}m${text}\u001b[0m`;
  };
}
