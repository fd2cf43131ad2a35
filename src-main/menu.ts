import { acceleratorOf, type Command } from '@core/protocol/commands';
import { commandNames, menuNames, programName } from '@core/words/screen-menu';
import type { MenuItemConstructorOptions as Item } from 'electron';
import type { Standing } from './bridge/desk';

const line: Item = { type: 'separator' };

/** Which commands mean something now. */
export function inForce(command: Command, { project, undo, redo }: Standing): boolean {
  if (command === 'plan.undo') return undo !== null;
  if (command === 'plan.redo') return redo !== null;
  if (command === 'project.create' || command === 'project.open' || command === 'project.demo') return true;
  return project !== null;
}

/**
 * The menu as data. A command is told to the page, which does what its own control for it does.
 *
 * The keys are only shown here: the page hears them itself, so that they work alike where no menu is, and leaves undo to a field that is being typed in.
 */
export function menuOf(platform: NodeJS.Platform, order: (command: Command) => void): Item[] {
  const item = (command: Command): Item => {
    const keys = acceleratorOf(command);
    return {
      id: command,
      label: commandNames[command],
      click: () => order(command),
      ...(keys === null ? {} : { accelerator: keys, registerAccelerator: false }),
    };
  };
  const mac = platform === 'darwin';
  const file: Item[] = [
    item('project.create'),
    item('project.open'),
    item('project.demo'),
    line,
    item('project.save-as'),
    item('report.freeze'),
    line,
    item('project.close'),
    ...(mac ? [] : [line, { role: 'quit' } as const]),
  ];
  const edit: Item[] = [
    item('plan.undo'),
    item('plan.redo'),
    line,
    { role: 'cut' },
    { role: 'copy' },
    { role: 'paste' },
    { role: 'selectAll' },
    line,
    item('job.cancel'),
  ];
  const view: Item[] = [
    { role: 'zoomIn' },
    { role: 'zoomOut' },
    { role: 'resetZoom' },
    line,
    { role: 'togglefullscreen' },
  ];
  return [
    ...(mac ? [{ label: programName, submenu: [{ role: 'hide' }, line, { role: 'quit' }] } satisfies Item] : []),
    { label: menuNames.file, submenu: file },
    { label: menuNames.edit, submenu: edit },
    {
      label: menuNames.places,
      submenu: [item('go.data'), item('go.variance'), item('go.fit'), item('go.report'), item('go.trail')],
    },
    { label: menuNames.view, submenu: view },
  ];
}
