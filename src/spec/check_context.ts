import type { Names, Room } from './names.js';
import type { Problems } from './problems.js';
import type { Place } from './spec.js';

/** What checking an expression needs to know of its surroundings. */
export interface CheckContext {
  names: Names;
  room: Room;
  problems: Problems;
  /** The place of an index of the expression's text. */
  placeAt: (at: number) => Place;
  /** Under float32 nothing may be converted while the controller runs. */
  convertsFreely: boolean;
}
