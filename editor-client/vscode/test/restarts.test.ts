import assert from 'node:assert/strict';
import { test } from 'node:test';
import { Restarts } from '../src/restarts';

test('three restarts in three minutes, then none until the first is three minutes old', () => {
  const restarts = new Restarts();
  const minute = 60_000;
  assert.deepEqual(
    [0, 1, 2, 2.9, 3, 3.1].map((at) => restarts.allowed(at * minute)),
    [true, true, true, false, true, false],
  );
});
