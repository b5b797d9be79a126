/** What the status bar says of the server. */
export type State =
  | { kind: 'starting' }
  | { kind: 'running'; version: string; origin: string; command: string }
  | { kind: 'stopped' }
  | { kind: 'missing'; message: string };

export interface StatusText {
  text: string;
  tooltip: string;
  /** The command that a click runs. */
  command: 'bandwright.restart' | 'bandwright.showLog';
  warns: boolean;
}

export function statusText(state: State): StatusText {
  switch (state.kind) {
    case 'starting':
      return {
        text: '$(sync~spin) bandwright',
        tooltip: 'The bandwright server is starting.',
        command: 'bandwright.showLog',
        warns: false,
      };
    case 'running':
      return {
        text: `$(check) bandwright ${state.version}`.trimEnd(),
        tooltip: `The bandwright server is running: ${state.command}, found in ${state.origin}. Click for the log.`,
        command: 'bandwright.showLog',
        warns: false,
      };
    case 'stopped':
      return {
        text: '$(warning) bandwright stopped',
        tooltip: 'The bandwright server has stopped. Click to start it again; the log says why.',
        command: 'bandwright.restart',
        warns: true,
      };
    case 'missing':
      return {
        text: '$(warning) bandwright not found',
        tooltip: `${state.message} Click to look again.`,
        command: 'bandwright.restart',
        warns: true,
      };
  }
}
