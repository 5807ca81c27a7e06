import { defineConfig } from 'vite'

// the studies as programs for Node, which cannot run TypeScript
export default defineConfig({
  define: { __VERSION__: JSON.stringify('study') },
  build: {
    ssr: true,
    target: 'node20',
    outDir: '.study/built',
    rollupOptions: { input: { elements: 'test/study/elements.ts', plates: 'test/study/plates.ts', bars: 'test/study/bars.ts' }, output: { entryFileNames: '[name].js' } }
  },
  ssr: { noExternal: true }
})
