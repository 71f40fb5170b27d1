/**
 * Types and lint rules in one go: most lint rules ask for types, so both need the same program of all
 * sources, and making it twice took as long as everything else about it. Prints what is wrong.
 */
import path from 'node:path';

import { ESLint } from 'eslint';
import ts from 'typescript';

import { root } from './paths.mjs';

const TSCONFIG = path.join(root, 'test', 'tsconfig.json');

const program = programOf(TSCONFIG);
const faults = ts.getPreEmitDiagnostics(program);
if (faults.length > 0)
  process.stdout.write(ts.formatDiagnostics(faults, ts.createCompilerHost({})));

const lint = await lintWith(program);
process.stdout.write(lint.text);
// A warning is a fault too, as nobody reads warnings.
process.exitCode = faults.length + lint.faults > 0 ? 1 : 0;

function programOf(file) {
  const read = ts.getParsedCommandLineOfConfigFile(file, undefined, {
    ...ts.sys,
    onUnRecoverableConfigFileDiagnostic: (fault) => {
      throw new Error(ts.flattenDiagnosticMessageText(fault.messageText, '\n'));
    },
  });
  return ts.createProgram({
    rootNames: read.fileNames,
    options: read.options,
    configFileParsingDiagnostics: read.errors,
  });
}

async function lintWith(types) {
  const eslint = new ESLint({
    cwd: root,
    overrideConfigFile: path.join(root, 'test', 'eslint.config.mjs'),
    overrideConfig: {
      files: ['**/*.ts'],
      languageOptions: { parserOptions: { programs: [types] } },
    },
  });
  const results = await eslint.lintFiles(['.']);
  const formatter = await eslint.loadFormatter('stylish');
  return {
    faults: results.reduce((sum, one) => sum + one.errorCount + one.warningCount, 0),
    text: await formatter.format(results),
  };
}
