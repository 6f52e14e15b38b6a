import { useLocation } from 'react-router-dom'
import { paths } from '../lib/paths.ts'
import { LinkButton } from '../ui/button.tsx'
import { Empty } from '../ui/empty.tsx'
import { PageHead } from '../ui/page-head.tsx'

export default function NotFoundPage() {
  const { pathname } = useLocation()
  return (
    <>
      <PageHead place="Ogee" title="There is no such page" />
      <Empty>
        <p>
          Nothing stands at <code className="font-mono text-body">{pathname}</code>. If a link led here, tell
          whoever keeps it.
        </p>
        <p className="mt-2">
          <LinkButton to={paths.designs}>Designs</LinkButton>{' '}
          <LinkButton to={paths.history}>History</LinkButton>
        </p>
      </Empty>
    </>
  )
}
