import { readFileSync } from 'node:fs';
import { type Outcome, refuse } from '@core/protocol/outcome';
import type { Code } from '@core/protocol/problems';

const machine: { readonly [code: string]: 'no-permission' | 'file-in-use' } = {
  EACCES: 'no-permission',
  EPERM: 'no-permission',
  EBUSY: 'file-in-use',
};

/** The bytes of a file, or why they cannot be had: no such file or a folder is `file-not-found`, the rest is the machine's refusal. */
export function bytesOf({
  path,
  file,
  at,
}: {
  readonly path: string;
  readonly file: string;
  readonly at: string;
}): Outcome<Uint8Array> {
  try {
    return { ok: true, value: readFileSync(path) };
  } catch (error) {
    const reason = (error as NodeJS.ErrnoException).code ?? String(error);
    if (['ENOENT', 'EISDIR', 'ENOTDIR', 'ENAMETOOLONG', 'ERR_INVALID_ARG_VALUE'].includes(reason))
      return refuse('file-not-found', { file }, at);
    const code: Code | undefined = machine[reason];
    return code === undefined ? refuse('cannot-read', { file, reason }, at) : refuse(code, { file }, at);
  }
}
