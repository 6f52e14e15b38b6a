import tailwind from '@tailwindcss/vite'
import react from '@vitejs/plugin-react'
import { defineConfig, type Plugin } from 'vite'

// zod-config stands with zod: it must have run before any schema of the other files is made.
const basePackages =
  /node_modules\/(?:react|react-dom|scheduler|react-router|react-router-dom|@tanstack\/[^/]+|zod)\/|src\/app\/zod-config/
const startModules =
  /shared\/(?:call|errors|limits|contract\/(?:endpoint|ledger|primitives|problem|session))\.ts|src\/(?:lib\/(?:api|connection|leave|paths|query-client|storage)|features\/(?:ledger\/(?:note|public-facts|queries)|session\/(?:queries|sign-in-form))|ui\/(?:button|caution|clipboard|field|input|loading|mark|number-format|number-text|problem|status|use-countdown|word-mark))\./

/** The web application. In development the server mounts Vite in middleware mode, so there is no proxy here. */
export default defineConfig({
  publicDir: 'src/public',
  plugins: [react(), tailwind(), zodWithoutJsonSchema()],
  build: {
    outDir: 'dist/web',
    emptyOutDir: true,
    // The content security policy knows no data: addresses, so nothing is inlined.
    assetsInlineLimit: 0,
    target: 'es2023',
    // mathjs alone is over the default; it loads with the first cell that holds arithmetic.
    chunkSizeWarningLimit: 800,
    // Two files for what sign-in needs: fewer requests, and they pack smaller than two dozen pieces.
    rolldownOptions: {
      output: {
        codeSplitting: {
          groups: [
            { name: 'base', test: basePackages },
            { name: 'start', test: startModules },
          ],
        },
      },
    },
  },
})

/**
 * Each zod schema can write itself as JSON Schema, and so each drags that code along (about 7 kB gzip). Only the server
 * writes OpenAPI; pages only parse. Where zod's text changes and nothing is found, the bundle is bigger and not wrong.
 */
function zodWithoutJsonSchema(): Plugin {
  return {
    name: 'zod-without-json-schema',
    apply: 'build',
    transform(code, id) {
      if (!/zod\/v4\/classic\/schemas\.js$/.test(id)) return null
      const cut = code
        .replaceAll(/^\s*inst\._zod\.processJSONSchema = \(.*\) => processors\.\w+\(.*\);$/gm, '')
        .replaceAll(/create(?:Standard|To)JSONSchemaMethod\(this, [^)]*\)/g, 'undefined')
      return { code: cut, map: null }
    },
  }
}
