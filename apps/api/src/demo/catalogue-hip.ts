import { two, type Listed } from './listed.js'

const HIP = { maker: 'gannetholme', category: 'implant' } as const
const STEM = { ...HIP, system: 'Withyholt', kind: 'stem', partName: 'Femoral stem', taper: '12/14' } as const

function cementless(variant: 'standard' | 'high offset', letter: string, row: number): Listed[] {
  return Array.from({ length: 12 }, (_, index) => {
    const size = index + 1
    const usual = size >= 4 && size <= 9
    return {
      ...STEM,
      ref: `WTH-ST-${two(size)}-${letter}`,
      number: [3, row - 1, size],
      label: `Stem ${size}`,
      size: String(size),
      order: size,
      variant,
      bin: `B${row}-${size}`,
      par: usual ? 2 : 1,
      // Of 7 high offset one more has a story of its own: its last day is today.
      have: usual ? (size === 7 && row === 2 ? 1 : 3) : 1,
    }
  })
}

function cemented(): Listed[] {
  return Array.from({ length: 6 }, (_, index) => {
    const size = index + 1
    return {
      ...STEM,
      ref: `WTH-CM-${two(size)}`,
      number: [4, 0, size],
      label: `Stem ${size}`,
      size: String(size),
      order: size,
      variant: 'cemented',
      type: 'cemented',
      bin: 'B3',
      par: 1,
      have: 1,
    }
  })
}

const NECKS = [-4, 0, 4, 8] as const
const neckInRef = (neck: number): string => (neck < 0 ? `M${-neck}` : `P${neck}`)
const neckAsSaid = (neck: number): string => (neck < 0 ? `-${-neck}` : `+${neck}`)

function heads(variant: 'ceramic' | 'metal', of: number): Listed[] {
  return [28, 32, 36, 40].flatMap((size) =>
    NECKS.flatMap((neck, index): Listed[] => {
      // The smallest head is not made with the shortest neck.
      if (size === 28 && neck === -4) return []
      const usual = size === 32 || size === 36
      return [
        {
          ...HIP,
          system: 'Withyholt',
          ref: `WTH-HD-${size}-${neckInRef(neck)}${variant === 'metal' ? '-M' : ''}`,
          number: [5, of * 4 + index, size],
          kind: 'head',
          partName: 'Femoral head',
          label: `Head ${size} ${neckAsSaid(neck)}`,
          size: `${size} ${neckAsSaid(neck)}`,
          order: size + neck / 100,
          variant,
          diameterMm: size,
          taper: '12/14',
          bin: 'B4',
          par: usual ? 2 : 1,
          have: usual ? 3 : 2,
        },
      ]
    }),
  )
}

/** Shell group by shell size: a liner fits the shells of its own group. */
const groupOfShell = (size: number): string =>
  size <= 46 ? 'A' : size <= 50 ? 'B' : size <= 54 ? 'C' : size <= 58 ? 'D' : 'E'

function shells(): Listed[] {
  return Array.from({ length: 13 }, (_, index) => {
    const size = 44 + index * 2
    const usual = size >= 48 && size <= 58
    return {
      ...HIP,
      system: 'Cobnut',
      ref: `CBN-SH-${size}`,
      number: [1, 0, size],
      kind: 'shell',
      partName: 'Acetabular shell',
      label: `Shell ${size}`,
      size: String(size),
      order: size,
      diameterMm: size,
      group: groupOfShell(size),
      bin: `B5-${index + 1}`,
      par: usual ? 2 : 1,
      // Of 54 there is one sound package: the other is torn.
      have: size === 54 ? 1 : usual ? 3 : 2,
    }
  })
}

const LINERS: readonly (readonly [inner: number, groups: string])[] = [
  [28, 'AB'],
  [32, 'BCDE'],
  [36, 'CDE'],
  [40, 'DE'],
]

function liners(variant: 'flat' | 'lipped', of: number): Listed[] {
  return LINERS.flatMap(([inner, groups]) =>
    [...groups].map((group): Listed => {
      const row = 'ABCDE'.indexOf(group)
      return {
        ...HIP,
        system: 'Cobnut',
        ref: `CBN-LN-${group}${inner}${variant === 'lipped' ? '-L' : ''}`,
        number: [2, of * 5 + row, inner],
        kind: 'liner',
        partName: 'Liner',
        label: `Liner ${group}${inner}`,
        size: `${group}${inner}`,
        order: row * 100 + inner,
        variant,
        diameterMm: inner,
        group,
        bin: 'B6',
        par: 2,
        have: 3,
      }
    }),
  )
}

export const hipProducts = (): Listed[] => [
  ...cementless('standard', 'S', 1),
  ...cementless('high offset', 'H', 2),
  ...cemented(),
  ...heads('ceramic', 0),
  ...heads('metal', 1),
  ...shells(),
  ...liners('flat', 0),
  ...liners('lipped', 1),
]
