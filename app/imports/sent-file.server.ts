import { createHash } from 'node:crypto'
import { ImportRefused } from './import-refused.ts'
import { longestName } from './limits.ts'

/** A file as it was sent. It goes along with each step of the form, byte for byte, so that nothing is kept before the last. */
export type SentFile = { name: string; bytes: Uint8Array; digest: string; isNew: boolean }

/**
 * The file that a form brings: a newly chosen one, else that of the step before.
 *
 * @throws ImportRefused where it brings none
 */
export async function readSentFile(form: FormData): Promise<SentFile> {
  const file = form.get('file')
  if (file instanceof File && file.name !== '')
    return sentFile(file.name, new Uint8Array(await file.arrayBuffer()), true)
  const [content, name] = [form.get('content'), form.get('fileName')]
  if (typeof content !== 'string' || typeof name !== 'string' || content === '')
    throw new ImportRefused('Choose a CSV file with readings first.')
  return sentFile(name, new Uint8Array(Buffer.from(content, 'base64')), false)
}

function sentFile(name: string, bytes: Uint8Array, isNew: boolean): SentFile {
  return {
    name: plainName(name),
    bytes,
    digest: createHash('sha256').update(bytes).digest('hex'),
    isNew,
  }
}

/** Without the folders that some browsers tell, and without what is no character to be shown. */
function plainName(name: string): string {
  const last = name.split(/[/\\]/).at(-1) ?? ''
  return last.replace(/\p{C}/gu, '').trim().slice(0, longestName) || 'readings.csv'
}
