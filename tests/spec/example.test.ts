import { expect, test } from 'vitest';
import { errorsOf, heliostat } from './loading.js';

test('the example of the format loads as it stands', () => {
  expect(errorsOf(heliostat)).toEqual([]);
});
