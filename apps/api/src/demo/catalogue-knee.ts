import { two, type Listed } from './listed.js'

const DUNNOCK = { system: 'Dunnock', maker: 'tansyhill', category: 'implant' } as const

const KINDS_OF_FEMUR = [
  { type: 'CR', narrow: false },
  { type: 'PS', narrow: false },
  { type: 'CR', narrow: true },
  { type: 'PS', narrow: true },
] as const

/** Left and right femurs lie in cabinets of their own, so that a hand cannot slip to the other side. */
function femurs(): Listed[] {
  return KINDS_OF_FEMUR.flatMap(({ type, narrow }, row) =>
    (['left', 'right'] as const).flatMap((side, of) =>
      Array.from({ length: 10 }, (_, index) => index + 1)
        .filter((size) => !narrow || (size >= 3 && size <= 7))
        .map((size): Listed => ({
          ...DUNNOCK,
          ref: `DNK-FM-${two(size)}-${type}${narrow ? 'N' : ''}-${side === 'left' ? 'L' : 'R'}`,
          number: [1, row * 2 + of + 1, size],
          kind: 'femur',
          partName: 'Femoral component',
          label: `Femur ${size}`,
          size: String(size),
          order: size,
          variant: narrow ? `${type} narrow` : type,
          type,
          side,
          bin: side === 'left' ? `C-L${size}` : `D-R${size}`,
          par: size >= 3 && size <= 7 ? 2 : 1,
          have: size >= 3 && size <= 7 ? 3 : 1,
        })),
    ),
  )
}

const groupOfTray = (size: number): number => Math.ceil(size / 3)

function tibialTrays(): Listed[] {
  return Array.from({ length: 9 }, (_, index) => {
    const size = index + 1
    return {
      ...DUNNOCK,
      ref: `DNK-TB-${two(size)}`,
      number: [2, 0, size],
      kind: 'tibia',
      partName: 'Tibial tray',
      label: `Tibial tray ${size}`,
      size: String(size),
      order: size,
      group: `G${groupOfTray(size)}`,
      bin: 'C3',
      par: 2,
      have: 3,
    }
  })
}

function inserts(): Listed[] {
  return [1, 2, 3].flatMap((group) =>
    (['CR', 'PS'] as const).flatMap((type, of) =>
      [8, 9, 10, 11, 12, 14, 16, 18].map((thickness): Listed => ({
        ...DUNNOCK,
        ref: `DNK-IN-G${group}-${two(thickness)}-${type}`,
        number: [3, group * 2 + of, thickness],
        kind: 'insert',
        partName: 'Tibial insert',
        label: `Insert G${group} ${thickness}`,
        size: `G${group} ${thickness}`,
        order: group * 100 + thickness,
        variant: type,
        heightMm: thickness,
        type,
        group: `G${group}`,
        bin: 'C4',
        par: thickness >= 9 && thickness <= 12 ? 2 : 1,
        // Of the recalled lot three more have a story of their own.
        have: thickness >= 9 && thickness <= 12 ? 3 : 1,
      })),
    ),
  )
}

function patellas(): Listed[] {
  return [26, 29, 32, 35, 38, 41].map((size) => ({
    ...DUNNOCK,
    ref: `DNK-PT-${size}`,
    number: [4, 0, size],
    kind: 'patella',
    partName: 'Patella',
    label: `Patella ${size}`,
    size: String(size),
    order: size,
    diameterMm: size,
    bin: 'C5',
    par: 2,
    have: 3,
  }))
}

export const kneeProducts = (): Listed[] => [...femurs(), ...tibialTrays(), ...inserts(), ...patellas()]
