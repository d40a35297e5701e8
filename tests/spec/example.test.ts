import { expect, test } from 'vitest';
import { heliostat } from './heliostat_example.js';
import { errorsOf } from './loading.js';

test('the example of the format loads as it stands', () => {
  expect(errorsOf(heliostat)).toEqual([]);
});
