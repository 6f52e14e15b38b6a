import tailwind from '@tailwindcss/vite'
import react from '@vitejs/plugin-react'
import { defineConfig, type Plugin } from 'vite'

// zod-config stands with zod: it must have run before any schema of the other files is made.
const basePackages =
  /node_modules\/(?:react|react-dom|scheduler|react-router|react-router-dom|@tanstack\/(?:query-core|react-query)|zod)\/|src\/app\/zod-config/
const startModules =
  /shared\/(?:call|errors|limits|contract\/(?:endpoint|ledger|primitives|problem|proof|session))\.ts|src\/(?:lib\/(?:api|connection|leave|paths|query-client|storage)|features\/(?:ledger\/(?:note|public-facts|queries)|session\/(?:queries|sign-in-form))|ui\/(?:button|caution|clipboard|field|input|loading|mark|number-format|number-text|problem|status|use-countdown|word-mark))\./

// What the Design page draws by itself: two dozen pieces that only it uses pack smaller as one.
const designModules =
  /src\/(?:screens\/design-page\/(?!conflict|document-acts|choices|measured-units|network-texts|read-measured|revisions-panel|state-acts|tried-notice)|features\/design-form\/(?!template|document-file)|features\/sizing\/(?:explain|explained-sentence|ladder|pass|residual|span|spoken|trim-ladder|verdict)[^/]*$|ui\/(?:steady|text-nodes)\.)|shared\/(?:design-words\/(?:reach-remedy|verdict-sentences|words)\.)/

// Sizing is Design's and, for what a budget demands, a lot's: in a file of its own neither drags the other along.
const sizingModules = /shared\/solver\/sizing\/(?!measured-units|tolerance-factor|unit-error)/

// What nearly every page has, and what every page that computes has: small pieces that pack smaller together.
const pageModules =
  /src\/(?:lib\/keys|features\/bench\/outbox|ui\/(?:dialog|empty|key-hint|page-head|page-problem|quantity|section|table|time-text|use-scrolls|verdict|verdict-shape))\./
const solverModules =
  /shared\/(?:solver\/(?:adjuster|channel|converter|effects|network|point-rules|prepare-trim|solve-exact|version|distribution\/elementary))\.ts/

// The frame of every plot, on Design, Bench and a record's page.
const plotModules =
  /src\/ui\/(?:plot\/(?:axes|copy-csv|end-labels|plot-figure|plot-numbers|plot-svg|use-width|walk-points)|segmented|when-near)\./

/** The web application. In development the server mounts Vite in middleware mode, so there is no proxy here. */
export default defineConfig({
  publicDir: 'src/public',
  plugins: [react(), tailwind(), zodWithoutUnused(), routerWithoutFramework()],
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
          includeDependenciesRecursively: false,
          groups: [
            { name: 'base', test: basePackages },
            { name: 'start', test: startModules },
            { name: 'design', test: designModules },
            { name: 'sizing', test: sizingModules },
            { name: 'plots', test: plotModules },
            { name: 'solver', test: solverModules },
            { name: 'page', test: pageModules },
          ],
        },
      },
    },
  },
})

/**
 * Each zod schema can write itself as JSON Schema and has a method for each kind of text and each way to wrap it, and so
 * drags all that code along (about 10 kB gzip). Only the server writes OpenAPI, and our schemas use none of the methods
 * cut here (`tests/source.test.ts` sees to it). Where zod's text changes and nothing is found, the bundle is bigger and not
 * wrong.
 */
function zodWithoutUnused(): Plugin {
  return {
    name: 'zod-without-unused',
    apply: 'build',
    transform(code, id) {
      if (!/zod\/v4\/classic\/schemas\.js$/.test(id)) return null
      const cut = code
        .replaceAll(/^\s*inst\._zod\.processJSONSchema = \(.*\) => processors\.\w+\(.*\);$/gm, '')
        .replaceAll(/create(?:Standard|To)JSONSchemaMethod\(this, [^)]*\)/g, 'undefined')
        .replaceAll(/processors\.aggregateChecks\(inst\)\.\w+/g, 'undefined')
        .replaceAll(
          /^ {4}\w+\(params\) \{\n {8}return this\.check\(core\._\w+\(Zod\w+, params\)\);\n {4}\},$/gm,
          '',
        )
        .replaceAll(unusedWrappers, '')
      return { code: cut, map: null }
    },
  }
}
const unusedWrappers =
  /^ {4}(?:exactOptional|nonoptional|and|prefault|readonly|slugify|normalize|spa)\([^)]*\) \{\n.*\n {4}\},$/gm

/**
 * Links of the router can prefetch for its server framework, and its parts carry names for a debugger that keep unused
 * ones in the bundle: together about 5 kB gzip. We have neither. Where its text changes, the bundle is bigger and not wrong.
 */
function routerWithoutFramework(): Plugin {
  return {
    name: 'router-without-framework',
    apply: 'build',
    transform(code, id) {
      if (!/react-router\/dist\/.*\.mjs$/.test(id)) return null
      const cut = code
        .replaceAll(/^ *\w+\.displayName = "\w+";$/gm, '')
        .replaceAll(
          /^var (\w+) = (React\d*\.(?:forwardRef|createContext)\()/gm,
          'var $1 = /* @__PURE__ */ $2',
        )
        .replace(/return shouldPrefetch && !isAbsolute \? .* : link;/, 'return link;')
        .replace('var ENABLE_DEV_WARNINGS = true', 'var ENABLE_DEV_WARNINGS = false')
      return { code: cut, map: null }
    },
  }
}
