import { describeDrivers } from './driver-cases.ts'
import { virtualRoom } from './room.ts'

describeDrivers('a virtual line', async () => {
  const room = await virtualRoom()
  return { room, close: room.close }
})

describeDrivers('a virtual line that gives three bytes at a time', async () => {
  const room = await virtualRoom({ maxReadSize: 3 })
  return { room, close: room.close }
})
