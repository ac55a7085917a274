import type {
  CallKind,
  CallCommandName,
  Category,
  Hold,
  ItemCommandName,
  Outcome,
  Role,
  Side,
  Stage,
} from '@bellpull/domain'
import type { CaseStatus } from '@bellpull/contracts'

const stage: Record<Stage, string> = {
  called: 'Called',
  accepted: 'Accepted',
  pulled: 'Pulled',
  inRoom: 'In room',
  verified: 'Verified',
  opened: 'Opened',
}

const outcome: Record<Outcome, string> = {
  implanted: 'Implanted',
  used: 'Used',
  notImplanted: 'Opened, not implanted',
  returned: 'Put back',
  changed: 'Changed',
  cancelled: 'Cancelled',
  enteredInError: 'Entered in error',
}

const kind: Record<CallKind, string> = {
  early: 'Early',
  confirmed: 'Confirmed',
  standby: 'Stand by',
}

const hold: Record<Hold, string> = {
  held: 'Held',
  noneFree: 'None free',
  notStocked: 'Not kept by package',
}

const category: Record<Category, string> = {
  implant: 'Implant',
  sterile: 'Sterile item',
  tray: 'Tray',
  other: 'Something else',
}

/** Inside a sentence: "case LEFT" is written with `sideSign`. */
const side: Record<Side, string> = { left: 'left', right: 'right', either: 'either side' }
const sideSign: Record<Side, string> = { left: 'LEFT', right: 'RIGHT', either: 'EITHER' }

/** Imperatives, as they stand on buttons. */
const command: Record<ItemCommandName | CallCommandName, string> = {
  readBack: 'Read back',
  confirm: 'Confirm',
  accept: 'Accept',
  decline: 'Give back',
  pull: 'Mark pulled',
  deliver: 'Delivered',
  verify: 'Verify',
  open: 'Opened',
  openUnverified: 'Opened without verifying',
  implant: 'Implanted',
  use: 'Used',
  notImplanted: 'Not implanted',
  putBack: 'Put back',
  shelve: 'On the shelf',
  change: 'Change',
  choose: 'Choose',
  cancel: 'Cancel call',
  reject: 'Reject package',
  handOver: 'Hand over',
  take: 'Take',
  takeOver: 'Take over',
  askRelease: 'Ask to let go',
  decide: 'Decide',
  undo: 'Undo',
  enteredInError: 'Entered in error',
}

const role: Record<Role, string> = {
  surgeon: 'Surgeon',
  scrub: 'Scrub person',
  circulator: 'Circulating nurse',
  runner: 'Runner',
  core: 'Core technician',
  charge: 'Charge nurse',
  coordinator: 'Implant coordinator',
  admin: 'Administrator',
}

/** Behind a name: "I. Brindlecombe, circulating". */
const roleShort: Record<Role, string> = {
  surgeon: 'surgeon',
  scrub: 'scrub',
  circulator: 'circulating',
  runner: 'runner',
  core: 'core',
  charge: 'charge',
  coordinator: 'coordinator',
  admin: 'administrator',
}

const caseStatus: Record<CaseStatus, string> = {
  planned: 'Planned',
  inProgress: 'In progress',
  closed: 'Closed',
  cancelled: 'Cancelled',
}

const notImplantedReason = {
  sizeChanged: 'Another size was chosen',
  damaged: 'Damaged',
  contaminated: 'No longer sterile',
  defect: 'Defect',
  other: 'Something else',
}

export default {
  app: 'Bellpull',
  caution: 'Coordination aid. Read the label aloud. The surgeon decides.',
  stage,
  outcome,
  kind,
  hold,
  category,
  side,
  sideSign,
  fitsSide: { left: 'fits left', right: 'fits right', either: 'fits either side' } satisfies Record<
    Side,
    string
  >,
  caseSide: 'case {side}',
  command,
  role,
  roleShort,
  caseStatus,
  notImplantedReason,
  room: 'Room {number}',
  personAtWork: '{name}, {role}',
  nobody: 'nobody yet',
  you: 'you',
  useBy: 'use by {day}',
  lot: 'lot {lot}',

  nav: {
    label: 'Screens',
    room: 'Room',
    dispatch: 'Dispatch',
    fetch: 'To fetch',
    cases: 'Cases',
    case: 'Case',
    verify: 'Verify',
    skip: 'Go to the content',
    chooseRoom: 'Choose a room',
  },
  live: {
    current: 'Live',
    loading: 'Loading',
    old: '{age} old',
    offline: 'Line lost',
    offlineSince: 'Line lost, shown as of {age} ago',
    explain: 'What you see may have changed. It comes right by itself when the line is back.',
  },
  age: {
    seconds: '{n} s',
    minutes: '{n} min',
    hours: '{n} h',
  },
  person: {
    theme: 'Light or dark',
    system: 'As the device',
    light: 'Light',
    dark: 'Dark',
    signOut: 'Sign out',
  },
  time: {
    now: 'now',
    inMinutes: 'in {n} min',
    minutesAgo: '{n} min ago',
    justNow: 'just now',
    neededAt: 'needed {time}',
    standby: 'stand by',
    standbySince: 'stand by since {time}',
  },
  cord: {
    at: '{stage}, station {n} of {total}',
    ended: '{outcome}, after {stage}',
    late: 'late',
    noneFree: 'none free',
  },
  scan: {
    label: 'Scan or type a barcode',
    hint: 'Scan a package',
    clear: 'Clear',
    use: 'Use what was typed',
    second: 'First barcode read. Scan the second one of this label.',
  },
  state: {
    loading: 'Loading',
    failed: 'This could not be loaded',
    failedHint: 'Check the line to the house, then try again.',
    again: 'Try again',
    empty: 'Nothing here',
  },
  dialog: {
    cancel: 'Go back',
    confirm: 'Yes',
    reason: 'Reason',
    reasonHint: 'Plain words, no patient details',
    reasonMissing: 'Give a reason of at least {n} characters',
    chooseReason: 'Choose a reason',
    close: 'Close',
  },
  notSent: {
    title: 'Not sent',
    offline: 'The line is away. Nothing was sent by itself: tap again when it is back.',
    deadline: 'No answer in time. Tap again: it counts once, however often you tap.',
    again: 'Send again',
    discard: 'Discard',
  },
  notFound: {
    title: 'There is no such page',
    hint: 'It may have moved, or your role may not open it.',
    home: 'Go to my screen',
  },
  lostPage: {
    text: 'This page could not be loaded. Check the line, then try again.',
    again: 'Try again',
  },
  /** In the browser's tab. */
  pageTitle: '{page}, Bellpull',
}
