// A line between the program's process and the launcher's: either side calls the other by name and awaits the answer.

/** The end of a channel between processes, as `process` and a forked child both have it. */
type End = NodeJS.EventEmitter & { readonly connected: boolean; send?: ((message: Message) => boolean) | undefined };

type Message =
  | { readonly name: string; readonly words: readonly unknown[]; readonly turn: number | null }
  | { readonly turn: number; readonly value?: unknown; readonly error?: string };

// biome-ignore lint/suspicious/noExplicitAny: what crosses is of the harness's own making, and checked by the tests that use it
type Deeds = Readonly<Record<string, (...words: any[]) => unknown>>;

export interface Line {
  /** Asks for a deed of the other side. */
  readonly call: <T>(name: string, ...words: unknown[]) => Promise<T>;
  /** The same without waiting for an answer; a fault is printed over there. */
  readonly tell: (name: string, ...words: unknown[]) => void;
  /** Lets every open call fail: the other side is gone. */
  readonly hangUp: (reason: string) => void;
}

export function openLine(end: End, deeds: Deeds): Line {
  const open = new Map<number, { resolve(value: unknown): void; reject(error: Error): void }>();
  let last = 0;
  const send = (message: Message) => void (end.connected && end.send?.(message));

  const serve = async (name: string, words: readonly unknown[], turn: number | null) => {
    try {
      const deed = deeds[name];
      if (deed === undefined) throw new Error(`stand-in: nobody does '${name}' here`);
      const value = await deed(...words);
      if (turn !== null) send({ turn, value });
    } catch (error) {
      const told = error instanceof Error ? error.message : String(error);
      if (turn === null) console.error(`stand-in, ${name}: ${told}`);
      else send({ turn, error: told });
    }
  };
  end.on('message', (message: Message) => {
    if ('name' in message) return void serve(message.name, message.words, message.turn);
    const waiting = open.get(message.turn);
    open.delete(message.turn);
    if (message.error === undefined) waiting?.resolve(message.value);
    else waiting?.reject(new Error(message.error));
  });
  return {
    call: <T>(name: string, ...words: unknown[]) =>
      new Promise<T>((resolve, reject) => {
        if (!end.connected) return reject(new Error(`stand-in: the other process is gone ('${name}')`));
        const turn = ++last;
        open.set(turn, { resolve: resolve as (value: unknown) => void, reject });
        send({ name, words, turn });
      }),
    tell: (name, ...words) => send({ name, words, turn: null }),
    hangUp: (reason) => {
      for (const { reject } of open.values()) reject(new Error(reason));
      open.clear();
    },
  };
}
