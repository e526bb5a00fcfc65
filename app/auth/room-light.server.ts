import { createCookie } from 'react-router'
import * as z from 'zod'

export const roomLightSchema = z.enum(['lit', 'dark'])
type RoomLight = z.infer<typeof roomLightSchema>

/** Beside the account's own setting, so that the server renders the right look for someone not signed in as well. */
const cookie = createCookie('coilside_room_light', { path: '/', sameSite: 'lax', maxAge: 365 * 86_400 })

export async function readRoomLight(request: Request): Promise<RoomLight> {
  const parsed = roomLightSchema.safeParse(await cookie.parse(request.headers.get('Cookie')))
  return parsed.success ? parsed.data : 'lit'
}

export const roomLightCookie = (light: RoomLight) => cookie.serialize(light)
