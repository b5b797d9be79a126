import assert from 'node:assert/strict';
import { test } from 'node:test';
import { statusText } from '../src/status';

test('a running server shows its version and where it was found', () => {
  const shown = statusText({
    kind: 'running',
    version: '0.1.0',
    origin: 'PATH',
    command: '/usr/bin/bandwright',
  });
  assert.equal(shown.text, '$(check) bandwright 0.1.0');
  assert.match(shown.tooltip, /\/usr\/bin\/bandwright, found in PATH/);
  assert.equal(shown.warns, false);
});

test('a server that does not tell its version is shown without one', () => {
  const shown = statusText({ kind: 'running', version: '', origin: 'PATH', command: 'bandwright' });
  assert.equal(shown.text, '$(check) bandwright');
});

test('a stopped or missing server warns, and a click tries again', () => {
  for (const state of [{ kind: 'stopped' }, { kind: 'missing', message: 'It is not there.' }] as const) {
    const shown = statusText(state);
    assert.equal(shown.warns, true);
    assert.equal(shown.command, 'bandwright.restart');
  }
  assert.match(statusText({ kind: 'missing', message: 'It is not there.' }).tooltip, /^It is not there\./);
});
