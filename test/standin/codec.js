// Values as JSON that keeps what structured cloning keeps. The same text runs in the page's two worlds and in the launcher.

/** @param {Uint8Array} bytes */
function toText(bytes) {
  return typeof Buffer === 'undefined'
    ? bytes.toBase64()
    : Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString('base64');
}

/** @param {string} text */
function toBytes(text) {
  return typeof Buffer === 'undefined' ? Uint8Array.fromBase64(text) : new Uint8Array(Buffer.from(text, 'base64'));
}

/**
 * What JSON cannot say stands as { $: kind, of: ... }.
 * @param {any} value cloned before: no functions, no proxies
 * @returns {any}
 */
export function pack(value) {
  if (value === undefined) return { $: 'undefined' };
  if (typeof value === 'number')
    return Number.isFinite(value) && !Object.is(value, -0)
      ? value
      : { $: 'number', of: Object.is(value, -0) ? '-0' : String(value) };
  if (typeof value === 'bigint') return { $: 'bigint', of: String(value) };
  if (value === null || typeof value !== 'object') return value;
  if (Array.isArray(value)) return Array.from(value, pack);
  if (ArrayBuffer.isView(value))
    return {
      $: value.constructor.name,
      of: toText(new Uint8Array(value.buffer, value.byteOffset, value.byteLength)),
    };
  if (value instanceof ArrayBuffer) return { $: 'ArrayBuffer', of: toText(new Uint8Array(value)) };
  if (value instanceof Date) return { $: 'Date', of: pack(value.getTime()) };
  if (value instanceof Map) return { $: 'Map', of: pack([...value]) };
  if (value instanceof Set) return { $: 'Set', of: pack([...value]) };
  if (value instanceof Error) return { $: 'Error', of: `${value.message}` };
  const entries = Object.entries(value).map(([key, inner]) => [key, pack(inner)]);
  return entries.some(([key]) => key === '$' || key === '__proto__')
    ? { $: 'object', of: entries }
    : Object.fromEntries(entries);
}

/**
 * @param {any} packed
 * @returns {any}
 */
export function unpack(packed) {
  if (packed === null || typeof packed !== 'object') return packed;
  if (Array.isArray(packed)) return packed.map(unpack);
  const { $: kind, of } = packed;
  if (kind === undefined) return Object.fromEntries(Object.entries(packed).map(([key, inner]) => [key, unpack(inner)]));
  if (kind === 'undefined') return undefined;
  if (kind === 'number') return Number(of);
  if (kind === 'bigint') return BigInt(of);
  if (kind === 'ArrayBuffer') return toBytes(of).buffer;
  if (kind === 'Date') return new Date(unpack(of));
  if (kind === 'Map') return new Map(unpack(of));
  if (kind === 'Set') return new Set(unpack(of));
  if (kind === 'Error') return new Error(of);
  if (kind === 'object') return Object.fromEntries(of.map(([key, inner]) => [key, unpack(inner)]));
  const bytes = toBytes(of);
  const Kind = globalThis[kind === 'Buffer' ? 'Uint8Array' : kind];
  return Kind === Uint8Array
    ? bytes
    : new Kind(bytes.buffer, bytes.byteOffset, bytes.byteLength / (Kind.BYTES_PER_ELEMENT ?? 1));
}
