import { ref, watch } from 'vue'
import { useTheme } from 'vuetify'

export const THEME_CHOICES = ['system', 'light', 'dark'] as const
export type ThemeChoice = (typeof THEME_CHOICES)[number]

const KEY = 'bellpull.theme'

function remembered(): ThemeChoice {
  try {
    const kept = localStorage.getItem(KEY)
    return THEME_CHOICES.find((choice) => choice === kept) ?? 'system'
  } catch {
    return 'system'
  }
}

const choice = ref<ThemeChoice>(remembered())

watch(choice, (chosen) => {
  try {
    localStorage.setItem(KEY, chosen)
  } catch {
    // A browser that keeps nothing asks again next time.
  }
})

/** Light or dark, or as the device is set; remembered on this device. Follows the choice while it is in use. */
export function useThemeChoice() {
  const theme = useTheme()
  watch(choice, (chosen) => theme.change(chosen), { immediate: true })
  return { choice, isDark: () => theme.current.value.dark }
}
