// Modules that carry no types of their own.

/** A font file taken into the bundle by vite, as its data URI. */
declare module '*.woff?inline' {
  const dataUri: string
  export default dataUri
}

declare module 'opentype.js/dist/opentype.module.js' {
  export * from 'opentype.js'
}
