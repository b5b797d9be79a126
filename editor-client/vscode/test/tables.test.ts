import assert from 'node:assert/strict';
import { test } from 'node:test';
import { spacedTables } from '../src/tables';

test('cells get a fixed space on either side; the rule and the text around stay', () => {
  const table = [
    'Orders | by family',
    '',
    '| family | order |',
    '| ------ | ----: |',
    '| elliptic |  9 |',
    '',
    'End.',
  ];
  const spaced = spacedTables(table.join('\n')).replaceAll('&nbsp;', '_').split('\n');
  assert.deepEqual(spaced, [
    'Orders | by family',
    '',
    '|_family_|_order_|',
    '| ------ | ----: |',
    '|_elliptic_|_9_|',
    '',
    'End.',
  ]);
});
