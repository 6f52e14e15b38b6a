import tailwind from '@tailwindcss/vite'
import react from '@vitejs/plugin-react'
import { defineConfig } from 'vite'

/** The web application. In development the server mounts Vite in middleware mode, so there is no proxy here. */
export default defineConfig({
  publicDir: 'src/public',
  plugins: [react(), tailwind()],
  build: {
    outDir: 'dist/web',
    emptyOutDir: true,
    // The content security policy knows no data: addresses, so nothing is inlined.
    assetsInlineLimit: 0,
    target: 'es2023',
  },
})
