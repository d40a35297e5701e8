import type { Coefficient, Scaling, StoredElement } from './coefficient.js';
import { FirmwareError, quoted } from './failure.js';
import type { CoefficientRequest } from './request.js';

/**
 * Applies a request's scale and offset: value = stored number × scale + offset.
 * @throws FirmwareError `bad_request` when a list of them fits neither the elements nor the rows
 */
export function scaled(coefficient: Coefficient, request: CoefficientRequest): Coefficient {
  if (request.scale === undefined && request.offset === undefined) return coefficient;
  const scaling: Scaling = {
    scale: spread(coefficient, request.scale ?? 1, 'scale'),
    offset: spread(coefficient, request.offset ?? 0, 'offset'),
  };
  const elements = coefficient.elements.map((element, i): StoredElement => {
    const quantum = element.quantum === undefined ? undefined : element.quantum * Math.abs(scaling.scale[i]);
    return { ...element, value: element.value * scaling.scale[i] + scaling.offset[i], quantum };
  });
  return { ...coefficient, elements, scaling };
}

function spread(coefficient: Coefficient, given: number | readonly number[], what: string): number[] {
  const { elements, shape, path } = coefficient;
  const list = typeof given === 'number' ? elements.map(() => given) : given;
  const bad = list.find((entry) => !Number.isFinite(entry) || (what === 'scale' && entry === 0));
  if (bad !== undefined)
    throw new FirmwareError(
      'bad_request',
      `${quoted(path)}: ${what} ${bad} is not a finite number${what === 'scale' ? ' other than 0' : ''}`,
    );
  if (list.length === elements.length) return [...list];
  const rowLength = elements.length / (shape[0] ?? 1);
  if (list.length === shape[0]) return elements.map((_, i) => list[Math.floor(i / rowLength)]);
  const rows = shape.length > 1 ? ` or ${shape[0]} rows` : '';
  throw new FirmwareError(
    'bad_request',
    `${quoted(path)} has ${elements.length} elements${rows}, but ${list.length} numbers in ${what}: give one, or as many`,
  );
}
