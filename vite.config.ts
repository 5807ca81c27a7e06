import { readFileSync } from 'node:fs'
import { defineConfig } from 'vitest/config'

const { version } = JSON.parse(readFileSync('package.json', 'utf8')) as { version: string }

// one bundle for the command, one for the library: nothing but Node is needed to run either
export default defineConfig({
  define: { __VERSION__: JSON.stringify(version) },
  build: {
    ssr: true,
    target: 'node20',
    outDir: 'dist',
    sourcemap: true,
    rollupOptions: {
      input: { cli: 'src/cli.ts', index: 'src/index.ts', bench: 'src/bench.ts' },
      output: { entryFileNames: '[name].js', chunkFileNames: 'part/[name]-[hash].js' }
    }
  },
  ssr: { noExternal: true },
  test: { include: ['test/**/*.test.ts'], testTimeout: 30000 }
})
