import type { MeasureResult } from '../measure/measure.js';
import type { Limit, Place } from '../spec/spec.js';
import type {
  CoefficientRead,
  FinishedRun,
  JudgedPlant,
  Provenance,
  RequirementRun,
  SpecRun,
} from '../verdict/run.js';
import { portablePath } from './file_path.js';
import { siUnit } from './si_unit.js';
import { mergeInWords } from './since_latched.js';
import { comparisonJson, sinceLatchedJson, waiverJson } from './since_latched_json.js';
import { type Json, jsonNumber, stableJson } from './stable_json.js';

/**
 * The whole run as JSON: numbers in SI (angles in rad, margins as plain ratios, shares as fractions), an infinite one as
 * the word "infinite", one that could not be formed as null with a `why`. It holds no times and no absolute paths, so
 * that the same spec, image and version give the same bytes: paths below `root` are written relative to it.
 */
export function runJson(run: FinishedRun, root?: string): string {
  return stableJson({ pawl: run.version, specs: run.specs.map((spec) => specJson(spec, root)) });
}

function specJson(spec: SpecRun, root: string | undefined): Json {
  return {
    file: portablePath(spec.file, root),
    ...(spec.build !== undefined && { build: spec.build }),
    ...(spec.partial && { partial: true }),
    loop: spec.loop,
    seed: spec.seed,
    confidence: spec.confidence,
    plants: { ...spec.plants },
    scenarios: spec.scenarios.map(({ name, lasts }) => ({ name, lasts })),
    halvings: spec.halvings,
    merge: mergeInWords(spec) ?? null,
    ...(spec.sinceLatched ? { since_latched: sinceLatchedJson(spec.sinceLatched, root) } : {}),
    provenance: spec.provenance ? provenanceJson(spec.provenance, root) : null,
    coefficients: spec.coefficients.map((one) => coefficientJson(one, root)),
    requirements: spec.requirements.map((one) => requirementJson(one, root)),
  };
}

function requirementJson(requirement: RequirementRun, root: string | undefined): Json {
  const { verdict, evidence, counts, nominal, worst } = requirement;
  const why = verdict.kind === 'met' ? missing(worst) : verdict.why;
  return {
    name: requirement.name,
    at: placeJson(requirement.place, root),
    measure: requirement.measure,
    signals: { ...requirement.signals, ...(requirement.atSeveral && { at: requirement.atSeveral }) },
    scenario: requirement.scenario ?? null,
    reason: requirement.reason ?? null,
    limit: limitJson(requirement.limit),
    unit: siUnit(requirement.unit),
    written_unit: requirement.inDecibels ? 'dB' : requirement.unit.text,
    holds_for: requirement.holdsFor,
    verdict: verdict.kind,
    ...(why === undefined ? {} : { why }),
    evidence: evidenceJson(evidence),
    counts: { ...counts },
    claim: requirement.claim ?? null,
    ...(requirement.guardsNothing === undefined ? {} : { guards_nothing: requirement.guardsNothing }),
    nominal: resultJson(nominal.result),
    ...(nominal.result.kind === 'value'
      ? notes('nominal', nominal.result)
      : { nominal_why: nominal.result.why }),
    worst: resultJson(worst.result),
    ...(worst.result.kind === 'value' ? notes('worst', worst.result) : { worst_why: worst.result.why }),
    headroom: worst.headroom === undefined ? null : jsonNumber(worst.headroom),
    nominal_headroom: nominal.headroom === undefined ? null : jsonNumber(nominal.headroom),
    plant: Object.fromEntries(worst.parameters.map(({ name, value }) => [name, jsonNumber(value)])),
    plant_moved: Object.fromEntries(worst.parameters.map(({ name, moved }) => [name, jsonNumber(moved)])),
    plant_origin: worst.origin,
    ...(requirement.comparison ? { since_latched: comparisonJson(requirement.comparison) } : {}),
    ...(requirement.waiver ? { waiver: waiverJson(requirement.waiver) } : {}),
    ...scrutinyJson(requirement),
  };
}

function evidenceJson(evidence: RequirementRun['evidence']): Json {
  if (evidence.kind === 'nominal_only') return 'nominal only';
  return evidence.kind === 'proved' ? { proved: true, tried: evidence.plants } : { tried: evidence.plants };
}

/** What was found beyond the plants tried; only what there is. */
function scrutinyJson({ shrunk, reach, effects, proof, effort }: RequirementRun): Record<string, Json> {
  const found: Record<string, Json> = {};
  if (shrunk) {
    found.shrunk = {
      plant: Object.fromEntries(shrunk.parameters.map(({ name, value }) => [name, jsonNumber(value)])),
      moved: Object.fromEntries(shrunk.parameters.map(({ name, moved }) => [name, jsonNumber(moved)])),
      value: resultJson(shrunk.result),
      headroom: shrunk.headroom === undefined ? null : jsonNumber(shrunk.headroom),
    };
  }
  if (reach) found.reach = { factor: jsonNumber(reach.factor), found: reach.found };
  if (effects) {
    found.effects = effects.map(({ name, headroom, spread }) => ({
      ...{ name, headroom: jsonNumber(headroom), spread: jsonNumber(spread) },
    }));
  }
  if (proof) found.proof = { ...proof };
  if (effort) found.effort = { ...effort };
  return found;
}

function missing({ result }: JudgedPlant): string | undefined {
  return result.kind === 'value' ? undefined : result.why;
}

function resultJson(result: MeasureResult): Json {
  return result.kind === 'value' ? jsonNumber(result.value) : null;
}

function notes(of: string, { note }: { note?: string }): Record<string, string> {
  return note === undefined ? {} : { [`${of}_note`]: note };
}

function limitJson(limit: Limit): Json {
  if ('at_most' in limit) return { at_most: jsonNumber(limit.at_most) };
  if ('at_least' in limit) return { at_least: jsonNumber(limit.at_least) };
  return { between: limit.between.map(jsonNumber) };
}

function placeJson({ file, line, column }: Place, root: string | undefined): Json {
  return { file: portablePath(file, root), line, column };
}

function coefficientJson(
  { name, unit, coefficient, source }: CoefficientRead,
  root: string | undefined,
): Json {
  const { path, elements, shape, type, declaredAt } = coefficient;
  const values = elements.map(({ value }) => jsonNumber(value));
  const stored = elements.map((element) => element.stored);
  const isScalar = shape.length === 0;
  return {
    name,
    path,
    type,
    unit: unit?.text ?? null,
    ...(isScalar
      ? { value: values[0] ?? null, stored: stored[0] ?? null }
      : { shape: [...shape], values, stored }),
    ...(source ? { source: { file: portablePath(source.file, root), line: source.line } } : {}),
    declared_at: declaredAt ? { file: portablePath(declaredAt.file, root), line: declaredAt.line } : null,
  };
}

function provenanceJson(provenance: Provenance, root: string | undefined): Json {
  const { image, kind, bytes, sha256, buildId, compilers, symbols, build, buildSkipped } = provenance;
  return {
    image: kind === 'command' ? image : portablePath(image, root),
    ...(kind === undefined ? {} : { kind }),
    ...(symbols === undefined
      ? {}
      : { symbols: { image: portablePath(symbols.image, root), sha256: symbols.sha256 } }),
    bytes,
    sha256,
    build_id: buildId ?? null,
    compilers: [...compilers],
    build: build?.command ?? null,
    build_skipped: buildSkipped,
  };
}
