import type {
  CoefficientChange,
  CoefficientRead,
  ComparedResult,
  Comparison,
  LossShare,
  RequirementRun,
  SpecRun,
} from '../verdict/run.js';
import { storedNumber } from './coefficient_table.js';
import {
  formatNumber,
  formatResultShort,
  formatShare,
  formatValue,
  inWrittenUnit,
  unitText,
  type WrittenUnit,
} from './format_value.js';
import { oneLine, shortened } from './plain_text.js';
import { limitNumbers, measureName } from './requirement_in_words.js';
import { blocksMerge } from './verdict_words.js';

/** More changed coefficients are counted, not listed. */
const mostChanges = 8;
/** More numbers of one array are counted, not listed. */
const mostElements = 4;
/** Smaller changes of headroom than this are not worth a line: a tenth of a point. */
const leastToSay = 0.001;
/** Changes with less of a loss are left to the table. */
const leastShare = 0.1;

/** What the merge section led to: which reference was compared with, and what is not as it was. */
export function mergeInWords({
  merge,
  sinceLatched,
  coefficients: read,
  requirements,
}: Pick<SpecRun, 'merge' | 'sinceLatched' | 'coefficients' | 'requirements'>): string | undefined {
  if (!sinceLatched) return merge;
  const { path, reference, coefficients, spec, law } = sinceLatched;
  if (!reference) {
    const lawToo = law.length > 0 ? '; the control law needs one' : '';
    return `there is no latched reference ${oneLine(path)} yet, so nothing is compared${lawToo}: pawl latch writes it`;
  }
  const numbers = coefficients.slice(0, mostChanges).map((change) => changeInWords(change, read));
  const left = coefficients.length - numbers.length;
  if (left > 0) numbers.push(`${left} more coefficients`);
  const changes = [...numbers, ...[...spec, ...law].map((text) => oneLine(text))];
  const since = changes.length === 0 ? 'nothing changed' : `changed since: ${changes.join('; ')}`;
  const compared = `compared with the latched reference ${oneLine(path)} (${shortened(oneLine(reference.reason), 120)}); ${since}`;
  const idle = requirements.filter(({ waiver, verdict }) => waiver && verdict.kind === 'met');
  if (idle.length === 0) return compared;
  const names = idle.map(({ name }) => shortened(oneLine(name), 48));
  return `${compared}; no longer needed: the waiver of ${names.join(', ')}`;
}

/** A changed coefficient with its numbers: "kd 1.2 → 0.8 s", of an array those that differ: "notch[1] -1.73 → -1.69, …". */
export function changeInWords(change: CoefficientChange, coefficients: readonly CoefficientRead[]): string {
  const { name, latched, today, elements, unlike } = change;
  const read = coefficients.find((one) => one.name === name);
  const number = (value: number): string =>
    read && !read.coefficient.scaling ? storedNumber(value, read.coefficient.format) : formatNumber(value, 9);
  const all = (values: readonly number[] | undefined): string =>
    values === undefined ? 'nothing' : values.slice(0, mostElements).map(number).join(' ');
  const unit = read?.unit?.text ? ` ${oneLine(read.unit.text)}` : '';
  const shown = shortened(oneLine(name), 48);
  if (unlike !== undefined || !latched || !today)
    return `${shown} ${all(latched)} → ${all(today)} (${unlike})`;
  if (today.length === 1) return `${shown} ${number(latched[0])} → ${number(today[0])}${unit}`;
  if (elements.length === 0) return `${shown} in another number format`;
  const parts = elements
    .slice(0, mostElements)
    .map((at) => `${shown}[${at}] ${number(latched[at])} → ${number(today[at])}${unit}`);
  const left = elements.length - parts.length;
  return parts.join(', ') + (left > 0 ? ` and ${left} more` : '');
}

/** Where a coefficient is written in the sources: "azimuth_settings.c:10". */
export function sourceInWords({ coefficient, source }: CoefficientRead): string | undefined {
  const at = source ?? coefficient.declaredAt;
  return at && `${shortened(oneLine(at.file), 80)}:${at.line}`;
}

/** "kd 1.2 → 0.8 s (azimuth_settings.c:12) accounts for 92 % of the loss", the largest shares first. */
export function attributionInWords(
  { comparison }: Pick<RequirementRun, 'comparison'>,
  spec: SpecRun,
): string[] {
  const rows = comparison?.attribution ?? [];
  return rows
    .filter(({ share }, at) => at === 0 || Math.abs(share) >= leastShare)
    .map((row) => {
      const does = row.share < 0 ? 'makes up for' : 'accounts for';
      const share = shareText({ ...row, share: Math.abs(row.share) }, comparison!);
      return `${playerInWords(row, spec)} ${does} ${share} of the loss`;
    });
}

/** A coefficient of a loss with its old and new numbers and its place in the source. */
export function playerInWords({ name }: Pick<LossShare, 'name'>, spec: SpecRun): string {
  const change = spec.sinceLatched?.coefficients.find((one) => one.name === name);
  const read = spec.coefficients.find((one) => one.name === name);
  const place = read && sourceInWords(read);
  const words = change ? changeInWords(change, spec.coefficients) : oneLine(name);
  return words + (place === undefined ? '' : ` (${place})`);
}

/** A share of a loss, said to be sampled where it is. */
export function shareText({ share }: LossShare, { sampledOrders }: Comparison): string {
  return sampledOrders === undefined ? formatShare(share) : `about ${formatShare(share)}`;
}

/**
 * A requirement against the reference: "phase margin 52 deg → 44 deg: -9 deg from the firmware, +1 deg from the bounds of
 * friction". Undefined where nothing changed that is worth a line.
 */
export function comparisonInWords(requirement: RequirementRun): string | undefined {
  const { comparison, measure, verdict } = requirement;
  if (!comparison) return undefined;
  const { latched, rerun, today, why, fromSpec } = comparison;
  if (!latched) return `${measureName(measure)}: new since the latched reference`;
  if (!rerun) return `${measureName(measure)}: latched ${short(latched, requirement)}; ${oneLine(why ?? '')}`;
  const blocks = verdict.kind === 'slipped' || verdict.kind === 'broken';
  if (!blocks && !moved(latched, rerun) && !moved(rerun, today)) return undefined;
  if (!blocks && !isSeen(requirement, latched, rerun, today)) return undefined;
  if (!moved(latched, rerun) && !moved(rerun, today)) {
    const own =
      fromSpec.length === 0
        ? ''
        : `; what changed is ${fromSpec.map((text) => shortened(oneLine(text), 80)).join(' and ')}`;
    return `${measureName(measure)} as it was latched${own}`;
  }
  const way = `${measureName(measure)} ${short(latched, requirement)} → ${short(today, requirement)}`;
  const cameOrWent = (rerun.result.kind === 'value') !== (today.result.kind === 'value');
  if (cameOrWent && !moved(latched, rerun)) return `${way}, all from the firmware`;
  return `${way}: ${partsOf(requirement, comparison).join(', ')}`;
}

/** How much headroom the firmware lost or gained, where it did: "lost 7.1 points of headroom". */
export function headroomChange({ comparison }: Pick<RequirementRun, 'comparison'>): string | undefined {
  const lost = comparison?.lost;
  if (lost === undefined || Math.abs(lost) < leastToSay) return undefined;
  return `${lost > 0 ? 'lost' : 'gained'} ${formatNumber(Math.abs(lost) * 100, 3)} points of headroom`;
}

/**
 * Requirements whose headroom grew by more than a change may cost: their reference can be tightened. Nothing is said where a
 * requirement is broken or unjudged, for then there is no more to keep than the mistake.
 */
export function improvementsInWords({ requirements }: Pick<SpecRun, 'requirements'>): string | undefined {
  if (requirements.some((one) => blocksMerge(one) && one.verdict.kind !== 'slipped')) return undefined;
  const gained = requirements.filter(({ comparison }) => {
    return comparison?.lost !== undefined && comparison.lost < -comparison.maySlip;
  });
  if (gained.length === 0) return undefined;
  const each = gained.map((one) => `${oneLine(one.name)} ${headroomChange(one)}`);
  return `${each.join(', ')}: pawl latch keeps what was gained`;
}

/** A waiver: "waived until 2027-03-01: …", or why it does not count. */
export function waiverInWords({ waiver }: Pick<RequirementRun, 'waiver'>): string | undefined {
  if (!waiver) return undefined;
  const { reason, until, letsThrough, why } = waiver;
  const said = `until ${until}: ${shortened(oneLine(reason), 200)}`;
  return letsThrough ? `waived ${said}` : `a waiver does not count, since ${oneLine(why ?? '')} (${said})`;
}

function partsOf(requirement: RequirementRun, comparison: Comparison): string[] {
  const { latched, rerun, today, fromSpec } = comparison;
  // A limit moves headroom, and no result.
  const moving = fromSpec.filter((text) => text !== 'its limit');
  const named = moving.slice(0, 3).map((text) => shortened(oneLine(text), 80));
  const left = moving.length - named.length;
  const causes = named.join(' and ') + (left > 0 ? ` and ${left} more` : '');
  const spec = causes === '' ? 'plants found since' : causes;
  return [
    `${step(rerun!, today, requirement)} from the firmware`,
    `${step(latched!, rerun!, requirement)} from ${moved(latched!, rerun!) ? spec : 'the spec'}`,
  ];
}

/** From one result to another, in the written unit: "-9 deg", "+1 deg", "none". */
function step(from: ComparedResult, to: ComparedResult, written: WrittenUnit): string {
  if (from.result.kind === 'value' && to.result.kind === 'value') {
    if (from.result.value === to.result.value || isRounding(from, to)) return 'nothing';
    const change = inWrittenUnit(to.result.value, written) - inWrittenUnit(from.result.value, written);
    if (Number.isFinite(change))
      return `${change > 0 ? '+' : ''}${formatNumber(change, 3)}${unitOfChange(written)}`;
  }
  if (from.result.kind !== 'value' && to.result.kind !== 'value') return 'nothing';
  return `${plain(from, written)} → ${plain(to, written)}`;
}

/** The difference of two shares is no share of anything: "+27.9 percentage points". */
function unitOfChange(written: WrittenUnit): string {
  const unit = unitText(written);
  return unit === '%' ? ' percentage points' : unit === '' ? '' : ` ${unit}`;
}

function plain({ result }: ComparedResult, written: WrittenUnit): string {
  return result.kind === 'value' ? formatValue(result.value, written) : formatResultShort(result, written);
}

function short({ result }: ComparedResult, requirement: RequirementRun): string {
  return oneLine(formatResultShort(result, requirement, limitNumbers(requirement.limit)));
}

/** Whether any of the results that would be printed looks different from another one. */
function isSeen(requirement: RequirementRun, ...results: readonly ComparedResult[]): boolean {
  return new Set(results.map((one) => short(one, requirement))).size > 1;
}

/** Whether two results differ by less than a hundredth of a point of headroom: other plants were searched, nothing changed. */
function isRounding(a: ComparedResult, b: ComparedResult): boolean {
  if (a.headroom === undefined || b.headroom === undefined || a.headroom === 1) return false;
  return Math.abs(a.headroom - b.headroom) < leastToSay / 10;
}

/** Whether there is a difference worth a line, in headroom or in what kind of result there is. */
function moved(a: ComparedResult, b: ComparedResult): boolean {
  if (a.result.kind === 'value' && b.result.kind === 'value' && a.result.value === b.result.value) {
    return (a.headroom === undefined) !== (b.headroom === undefined);
  }
  if (a.headroom === undefined || b.headroom === undefined) return a.headroom !== b.headroom;
  return Math.abs(a.headroom - b.headroom) >= leastToSay || a.headroom === 1;
}
