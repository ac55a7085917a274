import { z } from 'zod'
import { day } from './ids.js'

const scanText = z.string().min(1).max(512)

/** One barcode, or the two barcodes of one label. */
export const scan = z.union([scanText, z.tuple([scanText, scanText])])
export type Scan = z.infer<typeof scan>

/** What a person typed from a label that no scanner reads; recorded as typed. */
export const typedLabel = z.strictObject({
  ref: z.string().trim().min(1).max(40),
  lot: z.string().trim().min(1).max(20),
  serial: z.string().trim().min(1).max(20).optional(),
  useByOn: day,
})
export type TypedLabel = z.infer<typeof typedLabel>

export const parseLabel = z.strictObject({ scan })

export const labelView = z
  .object({
    scheme: z.enum(['gs1', 'hibc']),
    gtin: z.string().optional(),
    lic: z.string().optional(),
    product: z.string().optional(),
    lot: z.string().optional(),
    serial: z.string().optional(),
    useByOn: day.optional(),
    madeOn: day.optional(),
    warnings: z.array(z.string()),
  })
  .meta({ id: 'Label' })
export type LabelView = z.infer<typeof labelView>

export const headQuery = z.strictObject({
  diameterMm: z.coerce.number().positive().max(200),
  ratio: z.coerce.number().positive().max(1),
})
export const headView = z.object({ radiusMm: z.number(), heightMm: z.number() }).meta({ id: 'HeadGeometry' })
