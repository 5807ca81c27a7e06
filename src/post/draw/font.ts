// The typeface of the pictures, embedded at build time: Barlow Medium, Latin part.
// Copyright 2017 The Barlow Project Authors, SIL Open Font License 1.1.

// the package's ES module by its path: its main file is a script that a test runner cannot take in as a module
import { parse, type Font } from 'opentype.js/dist/opentype.module.js'
import barlow from '@fontsource/barlow/files/barlow-latin-500-normal.woff?inline'

export type { Font }

/** Parses the embedded font; some 10 ms, once a picture. */
export function openFont(): Font {
  const bytes = Buffer.from(barlow.slice(barlow.indexOf(',') + 1), 'base64')
  return parse(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength))
}

/** Characters of `text` that the font has no glyph for, each once. */
export function missingGlyphs(font: Font, text: string): string[] {
  return [...new Set(text)].filter((character) => font.charToGlyphIndex(character) === 0)
}

/**
 * The nearest text that the font can draw: an accented letter that it lacks loses its accent, white space becomes a
 * space, other control characters go. What is still missing is drawn as the font's box with a question mark.
 */
export function drawableText(font: Font, text: string): string {
  return [...text.normalize('NFC').replace(/\s+/g, ' ')]
    .filter((character) => !/\p{C}/u.test(character))
    .map((character) => {
      if (font.charToGlyphIndex(character) !== 0) return character
      const [letter] = character.normalize('NFD')
      return font.charToGlyphIndex(letter) !== 0 ? letter : character
    })
    .join('')
}
