import { href, Link } from 'react-router'

/** Where a page is that stands below the list of runs. */
export function RunsLink() {
  return (
    <Link to={href('/runs')} className="block w-fit font-medium touch:py-3">
      Runs
    </Link>
  )
}
