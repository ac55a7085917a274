declare module 'subset-font' {
  /** The font cut down to the characters of `text`. */
  export default function subsetFont(
    font: Buffer,
    text: string,
    options: { targetFormat: 'woff2' | 'woff' | 'sfnt' },
  ): Promise<Buffer>
}
