/** A key with the one modifier of the platform (Control, or Command on a Mac) and perhaps Shift. */
interface Keys {
  readonly key: string;
  readonly shift: boolean;
}

/** Everything that the menu and the keyboard can order; the page offers each of them too. Keys: null where there are none. */
export const commands = {
  'project.create': { key: 'N', shift: false },
  'project.open': { key: 'O', shift: false },
  'project.demo': null,
  'project.save-as': { key: 'S', shift: true },
  'project.close': null,
  'plan.undo': { key: 'Z', shift: false },
  'plan.redo': { key: 'Z', shift: true },
  'report.freeze': { key: 'E', shift: false },
  'job.cancel': null,
  'go.data': { key: '1', shift: false },
  'go.variance': { key: '2', shift: false },
  'go.fit': { key: '3', shift: false },
  'go.report': { key: '4', shift: false },
  'go.trail': { key: '5', shift: false },
} as const satisfies Readonly<Record<string, Keys | null>>;

export type Command = keyof typeof commands;

/** What a keyboard event says of itself; a DOM event will do. */
interface Pressed {
  readonly key: string;
  readonly ctrlKey: boolean;
  readonly metaKey: boolean;
  readonly shiftKey: boolean;
  readonly altKey: boolean;
}

/**
 * The command that pressed keys order, or null. Control and Command count alike; Control+Y redoes as well.
 *
 * Example: commandOf({ key: 'z', ctrlKey: true, metaKey: false, shiftKey: true, altKey: false }) is 'plan.redo'.
 */
export function commandOf(pressed: Pressed): Command | null {
  if (pressed.altKey || pressed.ctrlKey === pressed.metaKey) return null;
  const key = pressed.key.toUpperCase();
  if (key === 'Y' && !pressed.shiftKey) return 'plan.redo';
  for (const [command, keys] of Object.entries(commands))
    if (keys !== null && keys.key === key && keys.shift === pressed.shiftKey) return command as Command;
  return null;
}

/** The keys as a menu and a hint name them to Electron: "CmdOrCtrl+Shift+S". */
export function acceleratorOf(command: Command): string | null {
  const keys: Keys | null = commands[command];
  return keys === null ? null : `CmdOrCtrl+${keys.shift ? 'Shift+' : ''}${keys.key}`;
}
