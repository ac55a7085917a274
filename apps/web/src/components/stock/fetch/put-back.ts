/** A bin's code without what scanners and people add: case, spaces, a closing line end. */
const plain = (code: string): string => code.replace(/\s+/g, '').toUpperCase()

/** Whether what was scanned or typed is this bin. */
export const isBin = (scanned: string, code: string): boolean => code !== '' && plain(scanned) === plain(code)
