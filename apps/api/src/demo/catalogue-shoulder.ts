import { headCapFromRatio } from '@bellpull/domain'
import { two, type Listed } from './listed.js'

const SALLOWBY = { system: 'Sallowby', maker: 'bracklethwaite', category: 'implant' } as const

/** Heads of the taper fit every stem of the system. */
const TAPER = 'S10'

const HEADS = [38, 40, 42, 44, 46, 48, 50, 52, 54, 56] as const
const HEADS_IN_HOUSE = {
  concentric: [1, 1, 2, 3, 4, 4, 4, 2, 1, 1],
  // One 48: the last one, which two rooms will want. No 56 at all.
  eccentric: [1, 1, 1, 2, 3, 1, 3, 1, 1, 0],
} as const
const STEMS_IN_HOUSE = [1, 1, 2, 3, 4, 3, 4, 4, 4, 2, 0, 1] as const

const rounded = (mm: number): number => Math.round(mm * 10) / 10

function heads(variant: 'concentric' | 'eccentric', letter: string, number: number): Listed[] {
  return HEADS.map((size, index) => ({
    ...SALLOWBY,
    ref: `SLB-HD-${size}${letter}`,
    number: [1, number, size],
    kind: 'head',
    partName: 'Humeral head',
    label: `Head ${size}`,
    size: String(size),
    order: size,
    variant,
    // Size is the diameter of the base; the height follows from the usual ratio.
    diameterMm: size,
    heightMm: rounded(headCapFromRatio(size).heightMm),
    taper: TAPER,
    bin: `A1-${index + 1}`,
    par: size >= 44 && size <= 50 ? 2 : 1,
    have: HEADS_IN_HOUSE[variant][index]!,
  }))
}

function stems(): Listed[] {
  return STEMS_IN_HOUSE.map((have, index) => {
    const size = index + 1
    return {
      ...SALLOWBY,
      ref: `SLB-ST-${two(size)}`,
      number: [2, 0, size],
      kind: 'stem',
      partName: 'Humeral stem',
      label: `Stem ${size}`,
      size: String(size),
      order: size,
      variant: 'press-fit',
      taper: TAPER,
      bin: `A2-${size}`,
      par: size >= 4 && size <= 8 ? 2 : 1,
      have,
    }
  })
}

function glenoids(): Listed[] {
  return (['S', 'M', 'L', 'XL'] as const).flatMap((size, index) =>
    (['pegged', 'keeled'] as const).map((variant, of): Listed => ({
      ...SALLOWBY,
      ref: `SLB-GL-${size}-${variant === 'pegged' ? 'P' : 'K'}`,
      number: [3, of, index + 1],
      kind: 'glenoid',
      partName: 'Glenoid',
      label: `Glenoid ${size}`,
      size,
      order: index + 1,
      variant,
      bin: `A3-${index * 2 + of + 1}`,
      par: 2,
      have: size === 'XL' ? 2 : 3,
    })),
  )
}

/** The small set with which an anatomic shoulder is turned into a reverse one. */
function reverse(): Listed[] {
  const part = { ...SALLOWBY, kind: 'other', variant: 'reverse', bin: 'A4', par: 1, have: 1 } as const
  const spheres = [36, 38, 40, 42]
  return [
    ...[25, 28].map((size): Listed => ({
      ...part,
      ref: `SLB-BP-${size}`,
      number: [4, 0, size],
      partName: 'Baseplate',
      label: `Baseplate ${size}`,
      size: String(size),
      order: size,
      diameterMm: size,
      type: 'baseplate',
    })),
    ...spheres.map((size): Listed => ({
      ...part,
      ref: `SLB-GS-${size}`,
      number: [5, 0, size],
      partName: 'Glenosphere',
      label: `Glenosphere ${size}`,
      size: String(size),
      order: size,
      diameterMm: size,
      group: String(size),
      type: 'glenosphere',
    })),
    ...spheres.flatMap((size) =>
      [0, 3, 6].map((height): Listed => ({
        ...part,
        ref: `SLB-CI-${size}-${height}`,
        number: [6, height, size],
        partName: 'Cup insert',
        label: `Cup insert ${size} +${height}`,
        size: `${size} +${height}`,
        order: size * 10 + height,
        group: String(size),
        type: 'cup insert',
      })),
    ),
  ]
}

export const shoulderProducts = (): Listed[] => [
  ...heads('concentric', 'C', 0),
  ...heads('eccentric', 'E', 1),
  ...stems(),
  ...glenoids(),
  ...reverse(),
]
