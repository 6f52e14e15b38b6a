import { Navigate } from 'react-router-dom'
import { usePerson } from '../features/session/use-person.ts'
import { paths } from '../lib/paths.ts'

/** Whoever records starts on Bench, whoever reads starts with the records. */
export default function HomePage() {
  const { role } = usePerson()
  return <Navigate replace to={role === 'engineer' || role === 'operator' ? paths.bench : paths.history} />
}
