/** One part of an element's value: digits (N), set 82 (X), set 39 (Y) or set 64 (Z), so many characters. */
export interface ValuePart {
  readonly set: 'N' | 'X' | 'Y' | 'Z'
  readonly min: number
  readonly max: number
  /** Rule for its content, by the dictionary's name; rules that this file does not use are left out. */
  readonly rule: string | null
}

/** A GS1 application identifier and what its value must be. */
export interface Identifier {
  readonly ai: string
  readonly parts: readonly ValuePart[]
  readonly minLength: number
  readonly maxLength: number
  /** Of a predefined length: the next element follows without a separator. */
  readonly predefined: boolean
  /** At least one of these combinations (`01` or `01+21`) must be on the same package. */
  readonly requires: readonly string[]
  /** None of these may be on the same package. */
  readonly excludes: readonly string[]
  /** May stand in the query of a Digital Link. */
  readonly inQuery: boolean
}

const ITEM = '01,02,03,8006,8026'

/**
 * Identifier or range, value, requires, excludes. Formats as in the GS1 Barcode Syntax Dictionary (GS1
 * AISBL). What must and must not go together is kept for what a sterile package or its carton may bear;
 * address lines, measures, prices and coupons are read over, not judged.
 */
const TABLE: readonly (readonly [ai: string, value: string, requires?: string, excludes?: string])[] = [
  ['00', 'N18,csum'],
  ['01', 'N14,csum', '', '255,37'],
  ['02', 'N14,csum', '37', '01,03'],
  ['03', 'N14,csum', '', '01,02,37,235'],
  ['10', 'X..20', ITEM],
  ['11', 'N6,yymmd0', ITEM],
  ['12', 'N6,yymmd0', '8020'],
  ['13', 'N6,yymmd0', ITEM],
  ['15', 'N6,yymmd0', ITEM],
  ['16', 'N6,yymmd0', ITEM],
  ['17', 'N6,yymmd0', `${ITEM},255`],
  ['20', 'N2', ITEM],
  ['21', 'X..20', '01,03,8006', '235'],
  ['22', 'X..20', '01'],
  ['235', 'X..28', '01'],
  ['240', 'X..30', ITEM],
  ['241', 'X..30', ITEM],
  ['242', 'N..6', '01,02,8006,8026'],
  ['243', 'X..20', '01,03'],
  ['250', 'X..30', '01+21,03+21,8006+21'],
  ['251', 'X..30', '01,03,8006'],
  ['253', 'N13,csum [X..17]'],
  ['254', 'X..20', '414'],
  ['255', 'N13,csum [N..12]', '', '01,02,415,8006,8020,8026'],
  ['30', 'N..8', '01,02'],
  ['3100-3699', 'N6'],
  ['37', 'N..8', '00+02,00+8026'],
  ['3900-3909', 'N..15'],
  ['3910-3919', 'N3 N..15'],
  ['3920-3929', 'N..15'],
  ['3930-3939', 'N3 N..15'],
  ['3940-3943', 'N4'],
  ['3950-3955', 'N6'],
  ['400', 'X..30'],
  ['401', 'X..30'],
  ['402', 'N17,csum'],
  ['403', 'X..30'],
  ['410-414', 'N13,csum'],
  ['415', 'N13,csum', '8020'],
  ['416-417', 'N13,csum'],
  ['420', 'X..20'],
  ['421', 'N3 X..9'],
  ['422', 'N3'],
  ['423', 'N..15'],
  ['424', 'N3'],
  ['425', 'N..15'],
  ['426', 'N3'],
  ['427', 'X..3'],
  ['4300-4301', 'X..35'],
  ['4302-4306', 'X..70'],
  ['4307', 'X2'],
  ['4308', 'X..30'],
  ['4309', 'N20'],
  ['4310-4311', 'X..35'],
  ['4312-4316', 'X..70'],
  ['4317', 'X2'],
  ['4318', 'X..20'],
  ['4319', 'X..30'],
  ['4320', 'X..35'],
  ['4321-4323', 'N1'],
  ['4324-4325', 'N6,yymmd0 N4'],
  ['4326', 'N6,yymmdd'],
  ['4330-4333', 'N6 [X1]'],
  ['7001', 'N13'],
  ['7002', 'X..30'],
  ['7003', 'N6,yymmdd N4,hhmi', '01,02,03'],
  ['7004', 'N..4'],
  ['7005', 'X..12'],
  ['7006', 'N6,yymmdd'],
  ['7007', 'N6,yymmdd [N6],yymmdd'],
  ['7008', 'X..3'],
  ['7009', 'X..10'],
  ['7010', 'X..2'],
  ['7011', 'N6,yymmdd [N4],hhmi'],
  ['7020', 'X..20', '01+416,03+416,8006+416'],
  ['7021', 'X..20', '01,03,8006'],
  ['7022', 'X..20', '7021'],
  ['7023', 'X..30'],
  ['7030-7039', 'N3 X..27'],
  ['7040', 'N1 X3'],
  ['710-717', 'X..20', '01'],
  ['7230-7239', 'X2 X..28'],
  ['7240', 'X..20'],
  ['7241', 'N2'],
  ['7242', 'X..25'],
  ['8001', 'N14'],
  ['8002', 'X..20'],
  ['8003', 'N1,zero N13,csum [X..16]'],
  ['8004', 'X..30'],
  ['8005', 'N6'],
  ['8006', 'N14,csum N4', '', '01,37'],
  ['8007', 'X..34'],
  ['8008', 'N6,yymmdd N2,hh [N..4],mmss'],
  ['8009', 'X..50'],
  ['8010', 'Y..30'],
  ['8011', 'N..12', '8010'],
  ['8012', 'X..20', '01,03,8006'],
  ['8013', 'X..25,csumalpha'],
  ['8014', 'X..25,csumalpha', '01'],
  ['8017', 'N18,csum', '', '8018'],
  ['8018', 'N18,csum', '', '8017'],
  ['8019', 'N..10'],
  ['8020', 'X..25', '415'],
  ['8026', 'N14,csum N4', '37', '02,8006'],
  ['8030', 'Z..90'],
  ['8110', 'X..70'],
  ['8111', 'N4'],
  ['8112', 'X..70'],
  ['8200', 'X..70'],
  ['90', 'X..30'],
  ['91-99', 'X..90'],
]

/** First two digits of identifiers whose elements end by their length (GS1 General Specifications). */
const PREDEFINED = /^(0[0-4]|1[1-9]|20|3[1-6]|41)/

/** Qualifiers and the like, which a Digital Link has in its path or not at all. */
const NOT_IN_QUERY: readonly string[] = [
  '03',
  '21',
  '22',
  '235',
  '254',
  '8011',
  '8014',
  '8019',
  '8020',
  '8030',
]

function readPart(text: string): ValuePart {
  const found = /^(\[?)([NXYZ])(\.\.)?(\d+)\]?(?:,(\w+))?$/.exec(text)
  if (!found) throw new RangeError(`no such value part: ${text}`)
  const [, optional, set, upTo, length, rule] = found
  const max = Number(length)
  const min = optional ? 0 : upTo ? 1 : max
  return { set: set as ValuePart['set'], min, max, rule: rule ?? null }
}

function expand(range: string): string[] {
  const [first, last] = range.split('-')
  if (first === undefined || last === undefined) return [range]
  const width = first.length
  const count = Number(last) - Number(first) + 1
  return Array.from({ length: count }, (_, index) => String(Number(first) + index).padStart(width, '0'))
}

const list = (text: string | undefined): string[] => (text ? text.split(',') : [])

const IDENTIFIERS: ReadonlyMap<string, Identifier> = new Map(
  TABLE.flatMap(([range, value, requires, excludes]) => {
    const parts = value.split(' ').map(readPart)
    return expand(range).map((ai): [string, Identifier] => [
      ai,
      {
        ai,
        parts,
        minLength: parts.reduce((sum, part) => sum + part.min, 0),
        maxLength: parts.reduce((sum, part) => sum + part.max, 0),
        predefined: PREDEFINED.test(ai),
        requires: list(requires),
        excludes: list(excludes),
        inQuery: !NOT_IN_QUERY.includes(ai),
      },
    ])
  }),
)

/** The identifier of exactly these digits, if there is one. */
export const identifierOf = (ai: string): Identifier | undefined => IDENTIFIERS.get(ai)

/** The identifier with which the text begins. None is the beginning of another, so at most one fits. */
export function identifierAt(text: string): Identifier | undefined {
  for (const length of [2, 3, 4]) {
    const found = text.length >= length ? IDENTIFIERS.get(text.slice(0, length)) : undefined
    if (found) return found
  }
  return undefined
}

/** Whether the text, too short to be an identifier, could be the beginning of one. */
export function beginsIdentifier(text: string): boolean {
  return text.length < 4 && [...IDENTIFIERS.keys()].some((ai) => ai.startsWith(text))
}
