import * as vscode from 'vscode';
import type { Middleware } from 'vscode-languageclient/node';
import { spacedTables } from './tables';

/** What VS Code needs otherwise than other editors. */
export const middleware: Middleware = {
  async provideHover(document, position, token, next) {
    const hover = await next(document, position, token);
    for (const content of hover?.contents ?? [])
      if (content instanceof vscode.MarkdownString) content.value = spacedTables(content.value);
    return hover;
  },
};
