/** A prosthetic head seen as a spherical cap. All lengths in mm. */
export interface HeadCap {
  /** Diameter of the circular base, D. */
  readonly diameterMm: number
  /** Radius of curvature, R. */
  readonly radiusMm: number
  /** Height of the dome over its base, h. */
  readonly heightMm: number
  /** Height over radius of curvature, k = h / R: 1 is a hemisphere. */
  readonly ratio: number
  /** Higher than half a sphere: its widest part is not its base, which is no shape for a head on a cut. */
  readonly moreThanHemisphere: boolean
}

/** A head's height is about three quarters of its radius of curvature (common practice, no source). */
export const USUAL_HEAD_RATIO = 0.75

function mustBePositive(name: string, value: number): void {
  if (!Number.isFinite(value) || value <= 0)
    throw new RangeError(`${name} must be more than 0 mm, got ${value}`)
}

/**
 * The cap over a base of `diameterMm` whose height is `ratio` times its radius of curvature:
 * R = (D/2) / √(2k − k²), h = kR.
 *
 * @param diameterMm base diameter D in mm.
 * @param ratio k = h / R, above 0 and below 2; 1 is a hemisphere, above it the result is flagged.
 * @throws {RangeError} when either is not finite or outside its range.
 * @see derived from a² = h(2R − h) with a = D/2; plane geometry of the sphere.
 */
export function headCapFromRatio(diameterMm: number, ratio: number = USUAL_HEAD_RATIO): HeadCap {
  mustBePositive('diameter', diameterMm)
  if (!(ratio > 0 && ratio < 2)) throw new RangeError(`ratio must lie between 0 and 2, got ${ratio}`)
  const radiusMm = diameterMm / 2 / Math.sqrt(2 * ratio - ratio * ratio)
  return { diameterMm, radiusMm, heightMm: ratio * radiusMm, ratio, moreThanHemisphere: ratio > 1 }
}

/**
 * The cap over a base of `diameterMm` that rises `heightMm`: R = (a² + h²) / 2h with a = D/2.
 *
 * @param diameterMm base diameter D in mm.
 * @param heightMm height h in mm; above D/2 it is more than a hemisphere, and flagged.
 * @throws {RangeError} when either is not finite or not above 0.
 */
export function headCapFromHeight(diameterMm: number, heightMm: number): HeadCap {
  mustBePositive('diameter', diameterMm)
  mustBePositive('height', heightMm)
  const halfMm = diameterMm / 2
  const radiusMm = (halfMm * halfMm + heightMm * heightMm) / (2 * heightMm)
  return { diameterMm, radiusMm, heightMm, ratio: heightMm / radiusMm, moreThanHemisphere: heightMm > halfMm }
}

/**
 * Angle in degrees that the dome spans at the centre of its sphere: 2 · arccos(1 − k). 180 is a hemisphere.
 * The picture of a head is drawn from it.
 */
export function headArcDegrees(cap: Pick<HeadCap, 'ratio'>): number {
  return (2 * Math.acos(1 - cap.ratio) * 180) / Math.PI
}
