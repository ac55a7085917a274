import type { ProblemCode } from '@bellpull/contracts'

/** Each way the house says no, in words that say what to do. */
const problem: Record<ProblemCode, string> = {
  'malformed-body': 'The house could not read what this screen sent. Load the page again.',
  'not-signed-in': 'You are signed out. Sign in and try again.',
  'wrong-credentials': 'E-mail or password is not right. Check both and try again.',
  'not-permitted': 'Your role may not do this. Ask somebody whose role may.',
  'not-found': 'This is not here any more. Go back and look again.',
  'body-too-large': 'That is too much at once. Send less.',

  'in-progress': 'This is still being done. Wait a moment.',
  'case-closed': 'The case is not open. Open the right case, or have it reopened.',
  'case-moved-on': 'Somebody changed the case just before you. Look again, then decide.',
  'call-moved-on': 'Somebody changed this call just before you. Look again, then decide.',
  'item-moved-on': 'Somebody was quicker. Look where the item is now, then decide.',
  'not-settled': 'Not everything in this case has an outcome yet. Settle what is listed first.',
  'patient-not-out': 'The patient is still in the room. Sign out when they have left.',
  'own-call': 'Who called it may not read it back. Ask somebody else in the room.',
  'not-read-back': 'The call has not been read back. Read it back first.',
  'none-free': 'No package is free. Tell the room what is there.',
  'nothing-to-undo': 'This can no longer be undone. Only your own last step can, for two minutes.',
  'verify-again': 'It was verified more than 15 minutes ago. Scan the package again.',
  'unit-held-elsewhere':
    'This package is held for somebody else. Put it back and take the one that is held for you.',
  'not-the-pulled-unit': 'This is not the package that was pulled. Find the one that was.',
  'wrong-item': 'The label is not what was called. Do not open it.',
  'label-differs': 'Label and record do not agree. Do not open it; take another package and tell the core.',
  'unit-expired': 'The package is past its use-by date. Do not open it; take another one.',
  'unit-quarantined': 'The package is in quarantine. Do not open it; take another one.',
  'unit-recalled': 'The lot has been recalled. Do not open it; take another one.',
  'unit-not-sterile': 'The package is not sterile. Do not open it; take another one.',
  'unit-not-in-stock': 'The house does not know this package. Do not open it; ask the core.',
  'wrong-side': 'The label is for the other side. Do not open it.',
  'pair-mismatch': 'The parts do not fit each other. Do not open it; tell the surgeon.',
  'second-checker-needed': 'A second person has to check. Ask somebody of the team.',
  'wrong-pin': 'The PIN is not right. Try again.',
  'not-as-heard': 'What was heard is not what is on the label. Read the label aloud once more.',
  'not-intact': 'The package must be dry, whole and sealed. If it is not, take another one.',

  'idempotency-key-missing': 'This screen left something out. Load the page again.',
  'idempotency-key-reused': 'This was sent before with other content. Look again, then tap again.',
  'invalid-input': 'Something in the entry is not right. Check it and try again.',
  'not-a-caller': 'This person may not call for the case. Choose the surgeon or the scrub person.',
  'side-not-of-case': 'The side is not the side of the case. Check the case.',
  'unknown-item': 'The catalogue has no such item. Choose another.',
  'not-called-here':
    'This is not asked for here. Blood, medicines, specimens and tissue have their own ways.',
  'label-unreadable': 'The label could not be read. Scan it again, or type it.',

  'too-many-attempts': 'Too many attempts. Wait a while, then try again.',
  'too-many-requests': 'Too many taps at once. Wait a moment.',
  unexpected: 'Something went wrong in the house. Try again; if it stays, say so.',
  unavailable: 'The house cannot reach its records. Try again in a moment.',
}

export default problem
