import { crc32 } from 'node:zlib'
import { PNG } from 'pngjs'
import { describe, expect, it } from 'vitest'
import { blankCanvas } from '../../../src/post/draw/canvas.ts'
import { encodePng } from '../../../src/post/draw/png.ts'

const WORDS = { title: 'Lift link, 8 × 60', software: 'offchart 0.1.0' }

/** A canvas in which every pixel is different. */
function chequered(width: number, height: number) {
  const canvas = blankCanvas(width, height, 0)
  for (let i = 0; i < canvas.pixel.length; i++) canvas.pixel[i] = (i * 37) % 256
  return canvas
}

/** Chunks by type; checks each one's checksum. */
function chunksOf(bytes: Uint8Array): Map<string, Buffer> {
  const file = Buffer.from(bytes)
  const chunks = new Map<string, Buffer>()
  for (let at = 8; at < file.length; ) {
    const length = file.readUInt32BE(at)
    const typed = file.subarray(at + 4, at + 8 + length)
    expect(file.readUInt32BE(at + 8 + length)).toBe(crc32(typed))
    const type = typed.toString('latin1', 0, 4)
    chunks.set(chunks.has(type) ? `${type} again` : type, typed.subarray(4))
    at += length + 12
  }
  return chunks
}

describe('encodePng', () => {
  it('writes pixels that a decoder reads back', () => {
    const canvas = chequered(31, 17)
    const read = PNG.sync.read(Buffer.from(encodePng(canvas, 160, WORDS)))
    expect([read.width, read.height]).toEqual([31, 17])
    for (let i = 0; i < 31 * 17; i++) {
      expect([...read.data.subarray(4 * i, 4 * i + 4)]).toEqual([...canvas.pixel.subarray(3 * i, 3 * i + 3), 255])
    }
  })

  it('states its printed size, its title and its program', () => {
    const chunks = chunksOf(encodePng(chequered(1600, 2), 160, WORDS))
    const size = chunks.get('pHYs')!
    expect([size.readUInt32BE(0), size.readUInt32BE(4), size[8]]).toEqual([10000, 10000, 1])
    expect(chunks.get('tEXt')!.toString('latin1')).toBe('Title\0Lift link, 8 × 60')
    expect(chunks.get('tEXt again')!.toString('latin1')).toBe('Software\0offchart 0.1.0')
    expect(chunks.get('IHDR')![9]).toBe(2)
  })

  it('takes a title beyond Latin-1 as UTF-8', () => {
    const chunks = chunksOf(encodePng(chequered(4, 2), 160, { ...WORDS, title: 'Táhlo č. 3' }))
    expect(chunks.get('iTXt')!.toString('utf8')).toBe('Title\0\0\0\0\0Táhlo č. 3')
  })

  it('gives the same bytes for the same picture', () => {
    expect(encodePng(chequered(40, 30), 160, WORDS)).toEqual(encodePng(chequered(40, 30), 160, WORDS))
  })
})
