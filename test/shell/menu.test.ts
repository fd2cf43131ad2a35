import { acceleratorOf, type Command, commandOf, commands } from '@core/protocol/commands';
import { commandNames, windowTitle } from '@core/words/screen-menu';
import { inForce, menuOf } from '@main/menu';
import type { MenuItemConstructorOptions as Item } from 'electron';
import { describe, expect, it } from 'vitest';

const all = Object.keys(commands) as Command[];
const itemsOf = (menu: readonly Item[]): Item[] =>
  menu.flatMap((item) => [item, ...(Array.isArray(item.submenu) ? itemsOf(item.submenu) : [])]);

describe('the menu', () => {
  it.each(['linux', 'win32', 'darwin'] as const)(
    'offers every command once, by its name and its keys, on %s',
    (platform) => {
      const ordered: Command[] = [];
      const items = itemsOf(menuOf(platform, (command) => ordered.push(command))).filter(({ id }) => id !== undefined);
      expect(items.map(({ id }) => id).sort()).toEqual([...all].sort());
      for (const item of items) {
        const command = item.id as Command;
        expect(item.label).toBe(commandNames[command]);
        expect(item.accelerator ?? null).toBe(acceleratorOf(command));
        item.click?.(undefined as never, undefined, undefined as never);
      }
      expect(ordered).toEqual(items.map(({ id }) => id));
    },
  );

  it('shows keys without taking them: the page hears them itself, and a field keeps its own undo', () => {
    for (const item of itemsOf(menuOf('linux', () => {})))
      if (item.id !== undefined && item.accelerator !== undefined) expect(item.registerAccelerator).toBe(false);
  });

  it('has cut, copy, paste and select all, without which a Mac’s text fields have no keys for them', () => {
    const roles = itemsOf(menuOf('darwin', () => {})).map(({ role }) => role);
    for (const role of ['cut', 'copy', 'paste', 'selectAll', 'quit', 'zoomIn', 'zoomOut'] as const)
      expect(roles).toContain(role);
  });

  it('puts no tools for developers and no reloading before a researcher', () => {
    const roles = itemsOf(menuOf('linux', () => {})).map(({ role }) => role);
    for (const role of ['toggleDevTools', 'reload', 'forceReload'] as const) expect(roles).not.toContain(role);
  });
});

describe('what of the menu is in force', () => {
  it('without a project, only what brings one', () => {
    const standing = { project: null, undo: null, redo: null };
    expect(all.filter((command) => inForce(command, standing))).toEqual([
      'project.create',
      'project.open',
      'project.demo',
    ]);
  });

  it('undo and redo where there is something to take back or do again', () => {
    expect(inForce('plan.undo', { project: 'a', undo: 'change', redo: null })).toBe(true);
    expect(inForce('plan.redo', { project: 'a', undo: 'change', redo: null })).toBe(false);
    expect(inForce('plan.redo', { project: 'a', undo: null, redo: 'change' })).toBe(true);
    expect(inForce('report.freeze', { project: 'a', undo: null, redo: null })).toBe(true);
  });
});

describe('the keys', () => {
  const press = (key: string, held: Partial<Record<'ctrlKey' | 'metaKey' | 'shiftKey' | 'altKey', boolean>>) =>
    commandOf({ key, ctrlKey: false, metaKey: false, shiftKey: false, altKey: false, ...held });

  it('give each command that has some, with Control as with Command', () => {
    for (const command of all) {
      const keys = commands[command];
      if (keys === null) continue;
      for (const held of ['ctrlKey', 'metaKey'] as const)
        expect(press(keys.shift ? keys.key : keys.key.toLowerCase(), { [held]: true, shiftKey: keys.shift })).toBe(
          command,
        );
    }
  });

  it('are not given twice', () => {
    const given = all.map(acceleratorOf).filter((keys) => keys !== null);
    expect(new Set(given).size).toBe(given.length);
  });

  it('order nothing alone, with the wrong modifier or with a key that nobody has', () => {
    expect(press('z', {})).toBeNull();
    expect(press('z', { altKey: true, ctrlKey: true })).toBeNull();
    expect(press('z', { ctrlKey: true, metaKey: true })).toBeNull();
    expect(press('o', { ctrlKey: true, shiftKey: true })).toBeNull();
    expect(press('q', { ctrlKey: true })).toBeNull();
  });

  it('redo by Control+Y as well', () => {
    expect(press('y', { ctrlKey: true })).toBe('plan.redo');
  });
});

describe('the title', () => {
  it('is the project’s name before the program’s', () => {
    expect(windowTitle(null)).toBe('Steelyard');
    expect(windowTitle('Care')).toBe('Care – Steelyard');
  });
});
