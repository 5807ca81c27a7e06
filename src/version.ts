// The program's version: package.json's, written in by the build (vite's `define`).

declare const __VERSION__: string

export const VERSION: string = typeof __VERSION__ === 'undefined' ? 'unbuilt' : __VERSION__
