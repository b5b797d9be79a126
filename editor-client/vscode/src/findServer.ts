import * as path from 'node:path';

/** Where the server's command may lie. Files are asked for through `isFile`, so that tests need no disk. */
export interface Places {
  /** The setting `bandwright.server.command`: a command with its arguments, or nothing. */
  setting: readonly string[];
  /** The Python extension's interpreter, if that extension is there and the workspace is trusted. */
  interpreter: string | undefined;
  /** The workspace's folders, if it is trusted: what lies in them is run. */
  trustedFolders: readonly string[];
  /** The value of PATH. */
  searchPath: string;
  platform: NodeJS.Platform;
  isFile(file: string): boolean;
}

export interface Server {
  command: string;
  args: readonly string[];
  /** Which place it was found in, as words for the log and the tooltip. */
  origin: string;
}

/** The first server of: the setting, the Python extension's environment, the workspace's `.venv`, PATH. */
export function findServer(places: Places): Server | undefined {
  const { join, dirname, isAbsolute, delimiter } = places.platform === 'win32' ? path.win32 : path.posix;
  const windows = places.platform === 'win32';
  const program = windows ? 'bandwright.exe' : 'bandwright';
  const scripts = windows ? 'Scripts' : 'bin';
  // A relative entry of PATH would be read from whatever folder is current.
  const pathFolders = places.searchPath.split(delimiter).filter(isAbsolute);
  const first = (files: string[]) => files.find(places.isFile);

  const [named, ...args] = places.setting;
  if (named !== undefined) {
    // What the user names is never replaced by another server: where it is missing, that is said.
    const file = windows && path.win32.extname(named) === '' ? `${named}.exe` : named;
    const command = first(isAbsolute(file) ? [file] : pathFolders.map((folder) => join(folder, file)));
    return command === undefined
      ? undefined
      : { command, args, origin: 'the setting bandwright.server.command' };
  }

  const searches: [origin: string, files: string[]][] = [];
  if (places.interpreter !== undefined) {
    const folder = dirname(places.interpreter);
    // Beside the interpreter, or, for an interpreter at the environment's top, in its folder of scripts.
    const files = [join(folder, program), join(folder, scripts, program)];
    searches.push(["the Python extension's environment", files]);
  }
  searches.push([
    "the workspace's .venv",
    places.trustedFolders.map((folder) => join(folder, '.venv', scripts, program)),
  ]);
  searches.push(['PATH', pathFolders.map((folder) => join(folder, program))]);
  for (const [origin, files] of searches) {
    const command = first(files);
    if (command !== undefined) return { command, args: ['serve'], origin };
  }
  return undefined;
}

/** What the user reads when there is no server: what was sought, and what to do. */
export function missingMessage(setting: readonly string[], trusted: boolean): string {
  if (setting.length > 0)
    return `bandwright: the setting bandwright.server.command names ${setting[0]}, which was not found. Correct the setting, or empty it to have the command looked for.`;
  const untrusted = trusted ? '' : ' The workspace is not trusted, so its own environment was left out.';
  return `bandwright is neither in a Python environment of this workspace nor on PATH.${untrusted} Install it there, or name its command in the settings.`;
}
