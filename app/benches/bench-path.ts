import { href } from 'react-router'

/** The page of a bench, to which all that is done on it goes back. */
export const benchPath = ({ benchId }: { benchId: string }) => href('/benches/:benchId', { benchId })

/** The page on which photos of a reading are sent and measured. */
export const photoPath = ({ benchId, readingId }: { benchId: string; readingId: string }) =>
  href('/benches/:benchId/readings/:readingId/photo', { benchId, readingId })
