// Runs in the page before its own scripts, once in the page's world and once in the preload's, behind codec.js.
// The two share the document and nothing else: what crosses is text in events under a name that the page never learns.

/** One side of the wall. Functions and promises stay where they were made; only their numbers cross. */
function wallSide({ mine, theirs }) {
  const kept = new Map();
  const awaited = new Map();
  const shout = window.dispatchEvent.bind(window);
  let last = 0;
  let answer;
  const send = (message) => shout(new CustomEvent(theirs, { detail: JSON.stringify(message) }));

  /** As across Electron's bridge: functions and promises by themselves, anything else as a clone, which proxies refuse. */
  const out = (value) => {
    if (typeof value === 'function') {
      kept.set(++last, value);
      return { function: last };
    }
    if (value instanceof Promise) {
      const promise = ++last;
      value.then(out).then(
        (settled) => send({ promise, settled }),
        (error) => send({ promise, error: String(error?.message ?? error) }),
      );
      return { promise };
    }
    return { value: pack(structuredClone(value)) };
  };
  const into = (crossed) => {
    if (crossed.error !== undefined) throw new Error(crossed.error);
    if (crossed.promise !== undefined)
      return new Promise((resolve, reject) => awaited.set(crossed.promise, { resolve, reject }));
    if (crossed.function === undefined) return unpack(crossed.value);
    return (...words) => {
      send({ call: crossed.function, words: words.map(out) }); // heard, done and answered before this line ends
      return into(answer);
    };
  };
  const obey = (call, words) => {
    try {
      return out(kept.get(call)(...words.map(into)));
    } catch (error) {
      return { error: String(error?.message ?? error) };
    }
  };
  window.addEventListener(mine, ({ detail }) => {
    const message = JSON.parse(detail);
    if (message.call !== undefined) send({ answer: obey(message.call, message.words) });
    else if (message.answer !== undefined) answer = message.answer;
    else if (message.expose !== undefined) {
      const members = Object.entries(message.members).map(([name, member]) => [name, into(member)]);
      Object.defineProperty(window, message.expose, {
        value: Object.freeze(Object.fromEntries(members)),
        enumerable: true,
      });
    } else {
      const waiting = awaited.get(message.promise);
      awaited.delete(message.promise);
      if (message.error === undefined) waiting.resolve(into(message.settled));
      else waiting.reject(new Error(message.error));
    }
  });
  return { send, out };
}

/** The preload's world: the built preload with a `require` that knows electron alone. */
// biome-ignore lint/correctness/noUnusedVariables: pages.ts calls it by its source text
function preloadWorld({ names, speak, hear, preload }) {
  const wall = wallSide({ mine: names.preload, theirs: names.page });
  const post = globalThis[speak];
  const waiting = new Map();
  const listeners = new Map();
  let last = 0;
  let heard = '';
  globalThis[hear] = (piece, isLast) => {
    heard += piece;
    if (!isLast) return;
    const message = unpack(JSON.parse(heard));
    heard = '';
    if (message.turn === undefined) {
      for (const listener of [...(listeners.get(message.channel) ?? [])]) listener({}, ...message.words);
      return;
    }
    const { resolve, reject } = waiting.get(message.turn);
    waiting.delete(message.turn);
    if (message.error === undefined) resolve(message.value);
    else reject(new Error(`Error invoking remote method: ${message.error}`));
  };
  const ipcRenderer = {
    invoke: (channel, ...words) =>
      new Promise((resolve, reject) => {
        waiting.set(++last, { resolve, reject });
        post(JSON.stringify(pack({ turn: last, channel, words: structuredClone(words) })));
      }),
    on: (channel, listener) => {
      listeners.set(channel, [...(listeners.get(channel) ?? []), listener]);
    },
    off: (channel, listener) => {
      listeners.set(
        channel,
        (listeners.get(channel) ?? []).filter((other) => other !== listener),
      );
    },
  };
  const contextBridge = {
    exposeInMainWorld: (key, api) =>
      void wall.send({
        expose: key,
        members: Object.fromEntries(Object.entries(api).map(([name, member]) => [name, wall.out(member)])),
      }),
  };
  preload((name) => {
    if (name === 'electron' || name === 'electron/renderer') return { contextBridge, ipcRenderer };
    throw new Error(`a sandboxed preload may not require '${name}'`);
  });
}

/** The page's world: hears what the preload gives it. */
// biome-ignore lint/correctness/noUnusedVariables: pages.ts calls it by its source text
function pageWorld({ names }) {
  wallSide({ mine: names.page, theirs: names.preload });
}
