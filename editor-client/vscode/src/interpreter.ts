import * as vscode from 'vscode';

/** The part of the Python extension's public interface that is used here. */
interface PythonExtension {
  environments?: {
    getActiveEnvironmentPath(resource?: vscode.Uri): unknown;
    resolveEnvironment(path: unknown): Promise<{ executable: { uri?: vscode.Uri } } | undefined>;
    onDidChangeActiveEnvironmentPath: vscode.Event<unknown>;
  };
}

async function environments(): Promise<PythonExtension['environments']> {
  const extension = vscode.extensions.getExtension<PythonExtension>('ms-python.python');
  return (await extension?.activate())?.environments;
}

/** The interpreter that the user chose in the Python extension; undefined without that extension. */
export async function activeInterpreter(): Promise<string | undefined> {
  const known = await environments();
  const folder = vscode.workspace.workspaceFolders?.[0]?.uri;
  const environment = await known?.resolveEnvironment(known.getActiveEnvironmentPath(folder));
  return environment?.executable.uri?.fsPath;
}

/** Calls back when the user chooses another interpreter. */
export async function onInterpreterChange(changed: () => void): Promise<vscode.Disposable | undefined> {
  return (await environments())?.onDidChangeActiveEnvironmentPath(changed);
}
