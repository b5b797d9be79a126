import * as vscode from 'vscode';
import { Connection } from './connection';
import { onInterpreterChange } from './interpreter';

let connection: Connection | undefined;

/** Never throws: where something fails, the log and a message say so. */
export function activate(context: vscode.ExtensionContext): void {
  const log = vscode.window.createOutputChannel('bandwright', { log: true });
  const current = new Connection(
    log,
    vscode.Uri.joinPath(context.extensionUri, 'README.md').with({ fragment: 'set-up' }),
  );
  connection = current;
  context.subscriptions.push(
    log,
    current,
    vscode.commands.registerCommand('bandwright.restart', () => current.restart()),
    vscode.commands.registerCommand('bandwright.showLog', () => log.show()),
    vscode.workspace.onDidGrantWorkspaceTrust(() => current.restart()),
    vscode.workspace.onDidChangeConfiguration((change) => {
      if (change.affectsConfiguration('bandwright.server')) void current.restart();
    }),
  );
  onInterpreterChange(() => void current.restartIfMoved()).then(
    (subscription) => subscription && context.subscriptions.push(subscription),
    (problem) => log.warn(`The Python extension could not be asked: ${problem}`),
  );
  void current.restart();
}

export async function deactivate(): Promise<void> {
  await connection?.stop();
}
