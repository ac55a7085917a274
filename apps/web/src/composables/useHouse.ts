import type { Notice, StockChanged } from '@bellpull/contracts'
import { onScopeDispose } from 'vue'
import { useLiveStore } from '@/stores/live'

/** Told of changes of stock for as long as the component lives. */
export function useStockChanged(heard: (changed: StockChanged) => void): void {
  onScopeDispose(useLiveStore().onStockChanged(heard))
}

/** Told of notices of one kind for as long as the component lives. */
export function useNotice(kind: string, heard: (message: Notice) => void): void {
  onScopeDispose(useLiveStore().onNotice(kind, heard))
}
