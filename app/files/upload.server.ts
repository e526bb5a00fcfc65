import { FormDataParseError, MultipartParseError, parseFormData } from '@remix-run/form-data-parser'
import { notAForm } from '../auth/request-body.server.ts'
import { largestUploadBytes } from './picture-limits.ts'

/**
 * The bytes of the one file that a form carries in a field, or null where it carries none. Throws a 400 for what is no
 * form, or one with more in it. How many bytes a request may have is limited before anything is read.
 */
export async function readUpload(request: Request, field: string): Promise<Uint8Array | null> {
  try {
    const form = await parseFormData(request, { maxFiles: 1, maxParts: 4, maxFileSize: largestUploadBytes })
    const file = form.get(field)
    return file instanceof File && file.size > 0 ? new Uint8Array(await file.arrayBuffer()) : null
  } catch (error) {
    if (error instanceof FormDataParseError || error instanceof MultipartParseError) throw notAForm()
    throw error
  }
}
