import { mount, type VueWrapper } from '@vue/test-utils'
import { createPinia, setActivePinia } from 'pinia'
import type { Component } from 'vue'
import { createMemoryHistory, createRouter } from 'vue-router'
import type { Role } from '@bellpull/domain'
import { i18n } from '@/plugins/i18n'
import { createTheme } from '@/plugins/vuetify'
import { useSessionStore } from '@/stores/session'

export interface MountOptions {
  readonly props?: Record<string, unknown>
  readonly slots?: Record<string, string>
  /** Signed in as somebody of this role. */
  readonly role?: Role
}

/** A component as it stands in the application: words, theme, stores, a router without pages. */
export function mountWith(
  component: Component,
  { props = {}, slots = {}, role }: MountOptions = {},
): VueWrapper {
  const pinia = createPinia()
  setActivePinia(pinia)
  const session = useSessionStore()
  if (role !== undefined) {
    session.user = { id: '00000000-0000-4000-8000-000000000001', name: 'Wren Abernoth', initials: 'WA', role }
    session.phase = 'signedIn'
  }
  const nowhere = { template: '<i />' }
  const router = createRouter({
    history: createMemoryHistory(),
    routes: ['home', 'signIn', 'room', 'dispatch', 'fetch', 'verify', 'cases', 'case'].map((name) => ({
      name,
      path: name === 'home' ? '/' : `/${name}/:id?/:number?/:itemId?`,
      component: nowhere,
    })),
  })
  return mount(component, {
    props,
    slots,
    attachTo: document.body,
    global: { plugins: [pinia, i18n, createTheme(), router] },
  })
}
