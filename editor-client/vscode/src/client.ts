import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import * as vscode from 'vscode';
import {
  CloseAction,
  ErrorAction,
  type ErrorHandler,
  LanguageClient,
  RevealOutputChannelOn,
} from 'vscode-languageclient/node';
import type { Server } from './findServer';
import { middleware } from './middleware';
import { Restarts } from './restarts';

/** What a band file is, wherever it lies and whatever language the user chose for it. */
export const BAND_FILE = { scheme: 'file', pattern: '**/*.bands.{yaml,yml}' };

/** A client whose troubles go to the log: what the user has to know is said once, in plain words, by the caller. */
class QuietClient extends LanguageClient {
  override error(message: string, data?: unknown): void {
    super.error(message, data, false);
  }
}

export interface Client {
  readonly connection: LanguageClient;
  /** Ends the server, in order where it answers. Never throws. */
  end(): Promise<void>;
}

/** A client for a server; `gaveUp` is called when a server that was ready ended too often to be started again. */
export function clientFor(server: Server, log: vscode.LogOutputChannel, gaveUp: () => void): Client {
  const restarts = new Restarts();
  let ended = false;
  let child: ChildProcess | undefined;

  async function launch(): Promise<ChildProcess> {
    const folder = vscode.workspace.workspaceFolders?.[0]?.uri.fsPath;
    child = spawn(server.command, server.args, folder === undefined ? {} : { cwd: folder });
    await once(child, 'spawn'); // throws where it can't be run
    return child;
  }

  const errorHandler: ErrorHandler = {
    error: () => ({ action: ErrorAction.Continue, handled: true }),
    closed: () => {
      // One that never answered would not the next time either; whoever started it hears of that.
      if (connection.initializeResult !== undefined && !ended) {
        if (restarts.allowed(Date.now())) return { action: CloseAction.Restart, handled: true };
        gaveUp();
      }
      return { action: CloseAction.DoNotRestart, handled: true };
    },
  };

  const connection = new QuietClient('bandwright', 'bandwright', launch, {
    documentSelector: [BAND_FILE],
    outputChannel: log,
    revealOutputChannelOn: RevealOutputChannelOn.Never,
    markdown: { isTrusted: false, supportHtml: false },
    initializationFailedHandler: () => false,
    errorHandler,
    middleware,
  });

  async function end(): Promise<void> {
    ended = true;
    try {
      await connection.dispose();
    } catch (problem) {
      log.warn(`The server did not end in order: ${problem}`);
      child?.kill();
    }
  }

  return { connection, end };
}
