import * as fs from 'node:fs';
import * as vscode from 'vscode';
import { State as ClientState } from 'vscode-languageclient/node';
import { BAND_FILE, type Client, clientFor } from './client';
import { findServer, missingMessage, type Server } from './findServer';
import { activeInterpreter } from './interpreter';
import { type State, statusText } from './status';

/** The one server of this window: finds it, starts it, shows how it is. None of its methods throws. */
export class Connection implements vscode.Disposable {
  private client: Client | undefined;
  private server: Server | undefined;
  /** Starts and stops wait for one another here, so that two restarts leave one server. */
  private turn: Promise<void> = Promise.resolve();
  private readonly item = vscode.window.createStatusBarItem(
    'bandwright.server',
    vscode.StatusBarAlignment.Right,
    100,
  );
  private readonly editorsChange: vscode.Disposable;

  constructor(
    private readonly log: vscode.LogOutputChannel,
    private readonly setUpText: vscode.Uri,
  ) {
    this.item.name = 'bandwright server';
    this.editorsChange = vscode.window.onDidChangeVisibleTextEditors(() => this.showItem());
    this.show({ kind: 'starting' });
  }

  restart(): Promise<void> {
    return this.inTurn(async () => this.start(await this.find()));
  }

  /** Restarts only if the server is now another one, as after the choice of another interpreter. */
  restartIfMoved(): Promise<void> {
    return this.inTurn(async () => {
      const found = await this.find();
      if (found?.command !== this.server?.command) await this.start(found);
    });
  }

  stop(): Promise<void> {
    return this.inTurn(() => this.end());
  }

  dispose(): void {
    this.editorsChange.dispose();
    this.item.dispose();
  }

  private inTurn(work: () => Promise<void>): Promise<void> {
    this.turn = this.turn.then(work).catch((problem: unknown) => this.fail(problem));
    return this.turn;
  }

  private async find(): Promise<Server | undefined> {
    const trusted = vscode.workspace.isTrusted;
    const folders = vscode.workspace.workspaceFolders ?? [];
    let interpreter: string | undefined;
    try {
      // It may lie in the workspace, whose programs run only when it is trusted.
      interpreter = trusted ? await activeInterpreter() : undefined;
    } catch (problem) {
      this.log.warn(`The Python extension could not be asked: ${problem}`);
    }
    return findServer({
      setting: commandSetting(),
      interpreter,
      trustedFolders: trusted ? folders.map((folder) => folder.uri.fsPath) : [],
      searchPath: process.env.PATH ?? '',
      platform: process.platform,
      isFile,
    });
  }

  private async start(server: Server | undefined): Promise<void> {
    await this.end();
    this.server = server;
    if (server === undefined) return this.reportMissing();

    this.show({ kind: 'starting' });
    this.log.info(`Starting ${[server.command, ...server.args].join(' ')}, found in ${server.origin}`);
    const client = clientFor(server, this.log, () => this.reportStopped('the server ended again and again'));
    this.client = client;
    client.connection.onDidChangeState(({ newState }) => {
      if (client !== this.client) return;
      if (newState === ClientState.Running) {
        const version = client.connection.initializeResult?.serverInfo?.version ?? '';
        this.show({ kind: 'running', version, origin: server.origin, command: server.command });
      } else {
        this.show({ kind: newState === ClientState.Starting ? 'starting' : 'stopped' });
      }
    });
    // Not waited for: one that never answers must not keep the next from its turn.
    client.connection.start().catch((problem: unknown) => {
      if (client === this.client) this.fail(problem);
    });
  }

  private async end(): Promise<void> {
    const client = this.client;
    this.client = undefined;
    await client?.end();
  }

  private fail(problem: unknown): void {
    this.log.error(`The server could not be started: ${problem}`);
    this.reportStopped('the server could not be started');
  }

  private reportStopped(what: string): void {
    this.show({ kind: 'stopped' });
    const command = this.server === undefined ? '' : ` The command was ${this.server.command}.`;
    void offer(`bandwright: ${what}.${command} The log says why.`, {
      'Show the Log': () => this.log.show(),
      'Open the Settings': openSettings,
    });
  }

  private reportMissing(): void {
    const message = missingMessage(commandSetting(), vscode.workspace.isTrusted);
    this.show({ kind: 'missing', message });
    this.log.warn(message);
    void offer(message, {
      'Open the Settings': openSettings,
      'How to Set Up': () => vscode.commands.executeCommand('markdown.showPreview', this.setUpText),
    });
  }

  private show(state: State): void {
    const { text, tooltip, command, warns } = statusText(state);
    this.item.text = text;
    this.item.tooltip = tooltip;
    this.item.command = command;
    this.item.backgroundColor = warns ? new vscode.ThemeColor('statusBarItem.warningBackground') : undefined;
    this.showItem();
  }

  /** The item is there while a band file is before the user. */
  private showItem(): void {
    const documents = vscode.window.visibleTextEditors.map((editor) => editor.document);
    if (documents.some((document) => vscode.languages.match(BAND_FILE, document) > 0)) this.item.show();
    else this.item.hide();
  }
}

function commandSetting(): string[] {
  return vscode.workspace.getConfiguration('bandwright').get<string[]>('server.command', []);
}

function isFile(file: string): boolean {
  try {
    return fs.statSync(file).isFile();
  } catch {
    return false; // missing, or in a folder that may not be read
  }
}

function openSettings(): Thenable<unknown> {
  return vscode.commands.executeCommand('workbench.action.openSettings', 'bandwright.server.command');
}

/** An error message with buttons, each with what it does. */
async function offer(message: string, buttons: Record<string, () => unknown>): Promise<void> {
  const chosen = await vscode.window.showErrorMessage(message, ...Object.keys(buttons));
  if (chosen !== undefined) await buttons[chosen]?.();
}
