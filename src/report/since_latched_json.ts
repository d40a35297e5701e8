import type {
  CoefficientChange,
  ComparedResult,
  Comparison,
  SinceLatched,
  WaivedRequirement,
} from '../verdict/run.js';
import { portablePath } from './file_path.js';
import { type Json, jsonNumber } from './stable_json.js';

/** What changed since the latched reference, for programs. */
export function sinceLatchedJson(since: SinceLatched, root: string | undefined): Json {
  const { path, reference, coefficients, spec, law } = since;
  return {
    path: portablePath(path, root),
    reference: reference ? { ...reference } : null,
    coefficients: coefficients.map(changeJson),
    spec,
    law,
  };
}

/** A comparison, for programs: SI, headroom and losses as shares of the limit. */
export function comparisonJson(comparison: Comparison): Json {
  const { latched, rerun, why, today, lost, maySlip, fromSpec, attribution, sampledOrders } = comparison;
  return {
    latched: latched ? comparedJson(latched) : null,
    rerun: rerun ? comparedJson(rerun) : null,
    ...(why === undefined ? {} : { rerun_why: why }),
    today: comparedJson(today),
    lost: lost === undefined ? null : jsonNumber(lost),
    may_slip: maySlip,
    from_spec: fromSpec,
    attribution: attribution.map((one) => ({
      name: one.name,
      share: jsonNumber(one.share),
      lost: jsonNumber(one.lost),
    })),
    ...(sampledOrders === undefined ? {} : { sampled_orders: sampledOrders }),
  };
}

/** A waiver, for programs. */
export function waiverJson({ reason, until, letsThrough, why }: WaivedRequirement): Json {
  return { reason, until, lets_through: letsThrough, ...(why === undefined ? {} : { why }) };
}

function changeJson({ name, latched, today, elements, unlike }: CoefficientChange): Json {
  return {
    name,
    latched: latched ? latched.map(jsonNumber) : null,
    today: today ? today.map(jsonNumber) : null,
    elements,
    ...(unlike === undefined ? {} : { unlike }),
  };
}

function comparedJson({ result, headroom }: ComparedResult): Json {
  return {
    ...(result.kind === 'value' ? { value: jsonNumber(result.value) } : { value: null, why: result.why }),
    headroom: headroom === undefined ? null : jsonNumber(headroom),
  };
}
