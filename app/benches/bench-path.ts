import { href } from 'react-router'

/** The page of a bench, to which all that is done on it goes back. */
export const benchPath = ({ benchId }: { benchId: string }) => href('/benches/:benchId', { benchId })
