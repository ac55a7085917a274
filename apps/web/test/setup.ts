/** What Vuetify asks of a browser and happy-dom does not have. */
class Observer {
  observe(): void {}
  unobserve(): void {}
  disconnect(): void {}
}
globalThis.ResizeObserver ??= Observer as unknown as typeof ResizeObserver
globalThis.IntersectionObserver ??= Observer as unknown as typeof IntersectionObserver
Object.defineProperty(globalThis, 'visualViewport', { value: new EventTarget(), configurable: true })
// Vuetify writes its styles beside its components; tests look at words and roles.
