/** "Ifeoma Brindlecombe" as it stands where room is short: "I. Brindlecombe". */
export function shortName(name: string): string {
  const [first = '', ...rest] = name.trim().split(/\s+/)
  return rest.length === 0 ? first : `${first.charAt(0)}. ${rest.join(' ')}`
}
