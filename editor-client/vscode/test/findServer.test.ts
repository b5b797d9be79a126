import assert from 'node:assert/strict';
import { test } from 'node:test';
import { findServer, missingMessage, type Places } from '../src/findServer';

/** A machine on which exactly these files exist. */
function machine(files: string[], change: Partial<Places> = {}): Places {
  return {
    setting: [],
    interpreter: undefined,
    trustedFolders: ['/plant'],
    searchPath: '/usr/local/bin:/usr/bin',
    platform: 'linux',
    isFile: (file) => files.includes(file),
    ...change,
  };
}

const IN_PATH = '/usr/bin/bandwright';
const IN_VENV = '/plant/.venv/bin/bandwright';
const IN_ENVIRONMENT = '/env/bin/bandwright';
const ALL = [IN_PATH, IN_VENV, IN_ENVIRONMENT];

test('the setting comes first, with its own arguments', () => {
  const places = machine([...ALL, '/usr/bin/uv'], { setting: ['uv', 'run', 'bandwright', 'serve'] });
  const found = findServer(places);
  assert.equal(found?.command, '/usr/bin/uv');
  assert.deepEqual(found?.args, ['run', 'bandwright', 'serve']);
});

test('an absolute command of the setting is taken as it stands', () => {
  const found = findServer(machine(['/opt/b w/bandwright'], { setting: ['/opt/b w/bandwright', 'serve'] }));
  assert.deepEqual([found?.command, found?.args], ['/opt/b w/bandwright', ['serve']]);
});

test('a setting that names nothing is not replaced by another server', () => {
  assert.equal(findServer(machine(ALL, { setting: ['/gone/bandwright', 'serve'] })), undefined);
});

test("then the Python extension's environment, the workspace's .venv, PATH", () => {
  const interpreter = '/env/bin/python';
  assert.equal(findServer(machine(ALL, { interpreter }))?.command, IN_ENVIRONMENT);
  assert.equal(findServer(machine([IN_PATH, IN_VENV], { interpreter }))?.command, IN_VENV);
  assert.equal(findServer(machine([IN_PATH], { interpreter }))?.command, IN_PATH);
  assert.deepEqual(findServer(machine([IN_PATH]))?.args, ['serve']);
});

test("a workspace that is not trusted is not looked into, and PATH's relative folders never are", () => {
  assert.equal(findServer(machine([IN_VENV], { trustedFolders: [] })), undefined);
  assert.equal(findServer(machine(['bin/bandwright'], { searchPath: 'bin:.:' })), undefined);
});

test('Windows: Scripts, .exe and semicolons', () => {
  const windows = {
    platform: 'win32',
    trustedFolders: ['C:\\plant'],
    searchPath: 'C:\\tools;D:\\bin',
  } as const;
  const venv = 'C:\\plant\\.venv\\Scripts\\bandwright.exe';
  assert.equal(findServer(machine([venv], windows))?.command, venv);
  const beside = 'C:\\conda\\Scripts\\bandwright.exe';
  assert.equal(
    findServer(machine([beside], { ...windows, interpreter: 'C:\\conda\\python.exe' }))?.command,
    beside,
  );
  const named = { ...windows, setting: ['bandwright', 'serve'] };
  assert.equal(findServer(machine(['D:\\bin\\bandwright.exe'], named))?.command, 'D:\\bin\\bandwright.exe');
});

test('the message says what was sought and what to do', () => {
  assert.match(missingMessage([], true), /PATH\. Install it there, or name its command in the settings\.$/);
  assert.match(missingMessage([], false), /not trusted/);
  assert.match(missingMessage(['/gone/bandwright'], true), /names \/gone\/bandwright, which was not found/);
});
