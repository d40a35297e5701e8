import type { Verdict } from '../../verdict/run.js';
import { html, type Markup } from './markup.js';

/** What lies between the two posts of a verdict's sign: a whole bar, one that slid down, a cut one, or a question. */
const between: Readonly<Record<Verdict['kind'], string>> = {
  met: 'M4 10H26',
  slipped: 'M4 16H26',
  broken: 'M4 10H10M20 10H26M12 15L18 5',
  unjudged: 'M4 10h3M23 10h3M12 7.5c0-4 6-4 6 0c0 2-3 2-3 4.5M15 15v.6',
};

/** A verdict as a word with its sign before it; the sign is for the eye only. */
export function verdictBadge(kind: Verdict['kind'], word: string = kind): Markup {
  return html`<span class="verdict ${kind}"><svg class="sign" viewBox="0 0 30 20" aria-hidden="true" focusable="false"><path d="M3 3V17M27 3V17${between[kind]}"/></svg><span>${word}</span></span>`;
}
