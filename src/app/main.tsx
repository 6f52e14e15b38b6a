import './zod-config.ts'
import '../ui/styles.css'
import { StrictMode } from 'react'
import { createRoot } from 'react-dom/client'
import { makeQueryClient } from '../lib/query-client.ts'
import { installAsciiCopy } from '../ui/clipboard.ts'
import { App } from './app.tsx'

installAsciiCopy(document)
const root = document.getElementById('root')
if (root) {
  createRoot(root).render(
    <StrictMode>
      <App queryClient={makeQueryClient()} />
    </StrictMode>,
  )
}
