import type { CALL_COMMAND_BODIES, ITEM_COMMAND_BODIES } from '@bellpull/contracts'
import type { z } from 'zod'
import { acceptCall, cancelCall, confirm, readBack, type CallJob } from './call-level.js'
import { cancelItem } from './cancel.js'
import { acceptItem, declineItem, deliverItem, takeOverItem } from './fetching.js'
import { pullItem } from './pull.js'
import { implantItem, notImplantedItem, putBackItem, shelveItem, useItem } from './settling.js'
import type { ItemJob } from './step.js'
import { undoItem } from './undo.js'
import { openItem, verifyItem, verifyTogether, type PinAnswer } from './verify.js'

type WithPin<B> = B & PinAnswer

type ItemHandlers = {
  [N in keyof typeof ITEM_COMMAND_BODIES]: (
    job: ItemJob<WithPin<z.infer<(typeof ITEM_COMMAND_BODIES)[N]>>>,
  ) => Promise<void>
}
type CallHandlers = {
  [N in keyof typeof CALL_COMMAND_BODIES]: (
    job: CallJob<WithPin<z.infer<(typeof CALL_COMMAND_BODIES)[N]>>>,
  ) => Promise<void>
}

/** What each command on an item does, by its name. */
export const ITEM_HANDLERS: ItemHandlers = {
  accept: acceptItem,
  decline: declineItem,
  pull: pullItem,
  deliver: deliverItem,
  verify: verifyItem,
  open: openItem,
  implant: implantItem,
  use: useItem,
  notImplanted: notImplantedItem,
  putBack: putBackItem,
  shelve: shelveItem,
  cancel: cancelItem,
  takeOver: takeOverItem,
  undo: undoItem,
}

/** What each command on a whole call does, by its name. */
export const CALL_HANDLERS: CallHandlers = {
  readBack,
  confirm,
  accept: acceptCall,
  cancel: cancelCall,
  verify: verifyTogether,
}
