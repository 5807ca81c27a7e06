// A canvas as a PNG file (ISO/IEC 15948): opaque 8-bit colour, with its printed size and words about it.
// The same canvas and words give the same bytes.

import { PNG } from 'pngjs'
import type { Canvas } from './canvas.ts'

/** Words that go into the file, for programs that list pictures. */
export interface PngWords {
  readonly title: string
  readonly software: string
}

/** PNG bytes; `printWidth` is the width on paper in mm. */
export function encodePng(canvas: Canvas, printWidth: number, { title, software }: PngWords): Uint8Array {
  const opaque = { colorType: 2, inputColorType: 2, bitDepth: 8, inputHasAlpha: false, filterType: 4 } as const
  const png = new PNG({ width: canvas.width, height: canvas.height, ...opaque })
  png.data = Buffer.from(canvas.pixel.buffer, canvas.pixel.byteOffset, canvas.pixel.byteLength)
  const plain = PNG.sync.write(png, opaque)

  // the header chunk, which comes first, ends after 8 bytes of signature and 25 of its own
  const afterHeader = 33
  return Buffer.concat([
    plain.subarray(0, afterHeader),
    resolutionChunk(canvas.width / (printWidth / 1000)),
    textChunk('Title', title),
    textChunk('Software', software),
    plain.subarray(afterHeader)
  ])
}

/** pHYs: pixels a metre, the same both ways. */
function resolutionChunk(pixelsPerMetre: number): Buffer {
  const body = Buffer.alloc(9)
  body.writeUInt32BE(Math.round(pixelsPerMetre), 0)
  body.writeUInt32BE(Math.round(pixelsPerMetre), 4)
  body[8] = 1
  return chunk('pHYs', body)
}

/** tEXt where Latin-1 holds the words, else iTXt, uncompressed UTF-8. */
function textChunk(keyword: string, words: string): Buffer {
  if ([...words].every((character) => character.codePointAt(0)! < 256)) {
    return chunk('tEXt', Buffer.from(`${keyword}\0${words}`, 'latin1'))
  }
  return chunk('iTXt', Buffer.from(`${keyword}\0\0\0\0\0${words}`, 'utf8'))
}

/** Length, type, body, checksum of type and body. */
function chunk(type: string, body: Buffer): Buffer {
  const typed = Buffer.concat([Buffer.from(type, 'latin1'), body])
  const framed = Buffer.alloc(typed.length + 8)
  framed.writeUInt32BE(body.length, 0)
  typed.copy(framed, 4)
  framed.writeUInt32BE(checksum(typed), typed.length + 4)
  return framed
}

/** Cyclic redundancy check of ISO/IEC 15948 annex D, bit by bit: the chunks are a few dozen bytes. */
function checksum(bytes: Uint8Array): number {
  let rest = 0xffffffff
  for (const byte of bytes) {
    rest ^= byte
    for (let bit = 0; bit < 8; bit++) rest = rest & 1 ? (rest >>> 1) ^ 0xedb88320 : rest >>> 1
  }
  return ~rest >>> 0
}
