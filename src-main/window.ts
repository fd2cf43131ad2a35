import { join } from 'node:path';
import { setTimeout as pause } from 'node:timers/promises';
import { ASK } from '@core/protocol/channels';
import type { Command } from '@core/protocol/commands';
import { refuse } from '@core/protocol/outcome';
import { pageLost, programName } from '@core/words/screen-menu';
import { BrowserWindow, dialog, nativeTheme } from 'electron';
import { answering } from './bridge/answer';
import { openSession, type Session } from './bridge/session';
import { deskOf } from './desk';
import { ORIGIN, PAGE_RIGHTS, speaker } from './security';

/** How long a closing window waits for the page's last words, and for each thing that is still under way. */
const LAST_WORDS = 150;
const PATIENCE = 5000;
/** A page lost twice within this time is not brought back again. */
const TOO_SOON = 10_000;

/** The ground of the page before it is drawn, as the page's own style has it, so that a dark window does not open white. */
const ground = () => (nativeTheme.shouldUseDarkColors ? '#1c1a17' : '#f7f4ec');

export interface Place {
  /** Address of the page server while developing, else null. */
  readonly development: string | null;
  /** A project named on the command line, to be offered to the page once it is there. */
  readonly offered: string | null;
}

/** A window with its session. */
export interface Opened {
  readonly window: BrowserWindow;
  /** A project that was asked for from outside while the window is open. */
  readonly offer: (file: string) => void;
  /** A command of the menu. */
  readonly order: (command: Command) => void;
}

/** Opens the program's window: one session, one project at a time. */
export function openWindow({ development, offered }: Place): Opened {
  const window = new BrowserWindow({
    width: 1280,
    height: 800,
    minWidth: 640,
    minHeight: 400,
    show: false,
    title: programName,
    backgroundColor: ground(),
    webPreferences: { preload: join(import.meta.dirname, '../preload/preload.cjs'), ...PAGE_RIGHTS },
  });
  const desk = deskOf(window);
  const session = openSession(desk);
  const offer = (file: string) => {
    session.offer(file);
    desk.tell({ kind: 'offered', file });
  };
  const recolour = () => window.setBackgroundColor(ground());
  nativeTheme.on('updated', recolour);
  window.once('closed', () => nativeTheme.off('updated', recolour));
  window.on('page-title-updated', (event) => event.preventDefault()); // the title is the project's name, whatever the page says
  window.once('ready-to-show', () => window.show());
  if (offered !== null) window.webContents.once('did-finish-load', () => offer(offered));
  bringBack(window);
  leaveInOrder({
    window,
    session,
    leaving: () => desk.tell({ kind: 'leaving' }),
    settled: answerAsks(window, session, development),
  });
  desk.show({ project: null, undo: null, redo: null });
  window.loadURL(development ?? `${ORIGIN}/index.html`).catch(() => giveUp(window));
  return { window, offer, order: (command) => desk.tell({ kind: 'command', command }) };
}

/** Answers what the window's page asks. Returns a wait for the answers that are still under way. */
function answerAsks(window: BrowserWindow, session: Session, development: string | null): () => Promise<unknown> {
  const answer = answering(development === null ? ORIGIN : new URL(development).origin, session.handlers);
  const underWay = new Set<Promise<unknown>>();
  window.webContents.ipc.handle(ASK, (event, question: unknown, payload: unknown) => {
    const answered = answer(speaker(event.senderFrame), String(question), payload);
    underWay.add(answered);
    void answered.finally(() => underWay.delete(answered));
    return answered;
  });
  return async () => {
    await Promise.allSettled(underWay);
    window.webContents.ipc.removeHandler(ASK);
    window.webContents.ipc.handle(ASK, () => refuse('cancelled', {}));
  };
}

/** The window goes once the page has said its last and what is under way has ended or been stopped: nothing accepted is lost. */
function leaveInOrder(of: {
  readonly window: BrowserWindow;
  readonly session: Session;
  readonly leaving: () => void;
  readonly settled: () => Promise<unknown>;
}): void {
  let isLeaving = false;
  const leave = async () => {
    of.window.hide();
    of.leaving();
    await pause(LAST_WORDS);
    await Promise.race([of.settled(), pause(PATIENCE)]);
    await Promise.race([of.session.close(), pause(PATIENCE)]);
  };
  of.window.on('close', (event) => {
    event.preventDefault();
    if (isLeaving) return;
    isLeaving = true;
    void leave().finally(() => of.window.destroy());
  });
}

/** A page that broke down is loaded again; the session is still here and has everything. */
function bringBack(window: BrowserWindow): void {
  let last = 0;
  window.webContents.on('render-process-gone', (_event, { reason }) => {
    if (reason === 'clean-exit') return;
    const now = Date.now();
    if (now - last > TOO_SOON) window.webContents.reload();
    else giveUp(window);
    last = now;
  });
}

function giveUp(window: BrowserWindow): void {
  if (window.isDestroyed()) return;
  dialog.showErrorBox(programName, pageLost);
  window.close();
}
