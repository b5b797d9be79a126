import assert from 'node:assert/strict';
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { test } from 'node:test';
import { loadWASM, OnigScanner, OnigString } from 'vscode-oniguruma';
import { type IGrammar, INITIAL, parseRawGrammar, Registry } from 'vscode-textmate';

const SCOPE = 'source.bands-yaml';
const FILE = 'syntaxes/bands.tmLanguage.json';

async function loadGrammar(): Promise<IGrammar> {
  const wasm = createRequire(`${process.cwd()}/`).resolve('vscode-oniguruma/release/onig.wasm');
  await loadWASM(readFileSync(wasm));
  const registry = new Registry({
    onigLib: Promise.resolve({
      createOnigScanner: (sources) => new OnigScanner(sources),
      createOnigString: (text) => new OnigString(text),
    }),
    loadGrammar: async () => parseRawGrammar(readFileSync(FILE, 'utf8'), FILE),
  });
  const grammar = await registry.loadGrammar(SCOPE);
  assert.ok(grammar);
  return grammar;
}

/** Every token of a text with its innermost scope, as `text: scope`; blanks and bare text left out. */
function tokens(grammar: IGrammar, text: string): string[] {
  let stack = INITIAL;
  const out: string[] = [];
  for (const line of text.split('\n')) {
    const { tokens: found, ruleStack } = grammar.tokenizeLine(line, stack);
    stack = ruleStack;
    for (const token of found) {
      const [, ...scopes] = token.scopes; // without the grammar's own
      const scope = scopes.at(-1)?.replace('.bands', '');
      const written = line.slice(token.startIndex, token.endIndex);
      if (scope !== undefined && !scope.startsWith('punctuation')) out.push(`${written}: ${scope}`);
    }
  }
  return out;
}

const NAME = 'entity.name.function';
const KEY = 'entity.name.tag';
const NUMBER = 'constant.numeric';
const UNIT = 'keyword.other.unit';
const WORD = 'variable.other.enummember';

test('names are what stands directly under devices and filters, at any depth of indentation', async () => {
  const grammar = await loadGrammar();
  for (const step of ['  ', '    ']) {
    const text = ['filters:', '  strain-slow: # slow', '    bands:', '', '  second one:', '    order: 9'];
    const found = tokens(grammar, text.map((line) => line.replaceAll('  ', step)).join('\n'));
    assert.deepEqual(found, [
      'filters: keyword.control.section',
      `strain-slow: ${NAME}`,
      '# slow: comment.line.number-sign',
      `bands: ${KEY}`,
      `second one: ${NAME}`,
      `order: ${KEY}`,
      `9: ${NUMBER}`,
    ]);
  }
});

test('bands, quantities and words', async () => {
  const text = ['filters:', '  a:', '    bands:', '      - pass: {to: 20 Hz, ripple: ±0.05 dB} # 3 dB'].join(
    '\n',
  );
  assert.deepEqual(tokens(await loadGrammar(), text).slice(3), [
    'pass: keyword.other.band',
    `to: ${KEY}`,
    `20: ${NUMBER}`,
    `Hz: ${UNIT}`,
    `ripple: ${KEY}`,
    `±0.05: ${NUMBER}`,
    `dB: ${UNIT}`,
    '# 3 dB: comment.line.number-sign',
  ]);
  assert.deepEqual(tokens(await loadGrammar(), 'structure: [cascade, direct-form-2]\nscale: 2^-30'), [
    `structure: ${KEY}`,
    `cascade: ${WORD}`,
    `direct-form-2: ${WORD}`,
    `scale: ${KEY}`,
    `2^-30: ${NUMBER}`,
  ]);
});

test('free text keeps its numbers and commas; a date is one thing', async () => {
  assert.deepEqual(
    tokens(await loadGrammar(), 'purpose: Static load, ahead of the 50 Hz log # old\nuntil: 2027-06-30'),
    [
      `purpose: ${KEY}`,
      'Static load, ahead of the 50 Hz log: string.unquoted',
      '# old: comment.line.number-sign',
      `until: ${KEY}`,
      '2027-06-30: constant.numeric.date',
    ],
  );
});
