import { type QueryClient, QueryClientProvider } from '@tanstack/react-query'
import { BrowserRouter } from 'react-router-dom'
import { StatusRegion } from '../ui/status.tsx'
import { AppRoutes } from './app-routes.tsx'
import { ErrorBoundary } from './error-boundary.tsx'

export function App({ queryClient }: { queryClient: QueryClient }) {
  return (
    <ErrorBoundary>
      <QueryClientProvider client={queryClient}>
        {/* Without transitions the page of an address is drawn before the next key arrives: what is typed then is not lost. */}
        <BrowserRouter useTransitions={false}>
          <AppRoutes />
        </BrowserRouter>
        <StatusRegion />
      </QueryClientProvider>
    </ErrorBoundary>
  )
}
