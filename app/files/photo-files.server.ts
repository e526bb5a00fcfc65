import { dirname, join } from 'node:path'
import { createFsFileStorage } from '@remix-run/file-storage/fs'
import { environment } from '../env.server.ts'

let opened: ReturnType<typeof createFsFileStorage> | undefined

/** The folder of the site's photos, made on the first use. */
function storage() {
  opened ??= createFsFileStorage(join(filesDirectory(), 'photos'))
  return opened
}

function filesDirectory(): string {
  const { FILES_DIR, DATABASE_URL } = environment()
  if (FILES_DIR) return FILES_DIR
  const file = /^file:(?!\/\/)([^?]+)/.exec(DATABASE_URL)?.[1]
  return join(file ? dirname(file) : '.data', 'files')
}

/** Keeps the bytes of a photo under its id. */
export async function keepPhoto(photoId: string, bytes: Uint8Array<ArrayBuffer>): Promise<void> {
  await storage().set(photoId, new File([bytes], `${photoId}.jpg`, { type: 'image/jpeg' }))
}

/** The bytes of a photo, or null where there is no such file. */
export async function openPhoto(photoId: string): Promise<ReadableStream<Uint8Array<ArrayBuffer>> | null> {
  const file = await storage().get(photoId)
  return file?.stream() ?? null
}

/** Removes what was kept for a photo that has no row. */
export async function dropPhoto(photoId: string): Promise<void> {
  await storage().remove(photoId)
}
