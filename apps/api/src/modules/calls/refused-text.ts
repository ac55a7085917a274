/**
 * Words for what has its own way in every hospital and is not asked for here. A net, not a judge: it
 * catches the plain words, and the entry field says the rule beside it.
 */
const OWN_WAYS: ReadonlyArray<{ readonly words: RegExp; readonly say: string }> = [
  {
    words: /\b(blood|red cells?|platelets?|plasma|cell saver|transfusion|crossmatch|cross-match)\b/i,
    say: 'Blood is not asked for here: use the blood bank’s own way.',
  },
  {
    words:
      /\b(antibiotics?|cefazolin|vancomycin|gentamicin|heparin|tranexamic|adrenaline|epinephrine|morphine|fentanyl|ketamine|propofol|lidocaine|lignocaine|bupivacaine|ropivacaine|medicines?|medications?|drugs?|injections?)\b/i,
    say: 'Medicines are not asked for here: use the pharmacy’s own way.',
  },
  {
    words: /\b(specimens?|biops(y|ies)|swabs? for culture|frozen section|pathology)\b/i,
    say: 'Specimens are not handled here: use the laboratory’s own way.',
  },
  {
    words: /\b(allograft|bone graft|donor tissue|tissue bank|tendon graft)\b/i,
    say: 'Tissue is not asked for here: use the tissue bank’s own way.',
  },
]

/** Why this free text may not be called, in the user's words, or `null`. */
export const refusedText = (text: string): string | null =>
  OWN_WAYS.find(({ words }) => words.test(text))?.say ?? null
