import 'virtual:icons.css'
import 'vuetify/styles/layers'
import 'vuetify/styles/core'
import { createVuetify, type ThemeDefinition } from 'vuetify'
import { aliases, mdi } from 'vuetify/iconsets/mdi'
import { DARK, LIGHT, type Tokens } from '@/theme/tokens'

/** Vuetify's own names for colours, said in ours. */
const theme = (tokens: Tokens, dark: boolean): ThemeDefinition => ({
  dark,
  colors: {
    ...tokens,
    background: tokens.linen,
    'on-background': tokens.ink,
    surface: tokens.paper,
    'on-surface': tokens.ink,
    'surface-variant': tokens['ink-2'],
    'on-surface-variant': tokens.paper,
    primary: tokens.ink,
    'on-primary': tokens.linen,
    secondary: tokens.brass,
    'on-secondary': tokens['on-brass'],
    success: tokens.verdigris,
    'on-success': tokens.paper,
    error: tokens.madder,
    'on-error': tokens.paper,
    warning: tokens['brass-ink'],
    'on-warning': tokens.paper,
    info: tokens['ink-2'],
    'on-info': tokens.paper,
  },
  variables: {
    'border-color': tokens.edge,
    'border-opacity': 1,
    'high-emphasis-opacity': 1,
    'medium-emphasis-opacity': 0.85,
    'disabled-opacity': 0.45,
  },
})

export const createTheme = (): ReturnType<typeof createVuetify> =>
  createVuetify({
    theme: {
      defaultTheme: 'system',
      utilities: false,
      themes: { light: theme(LIGHT, false), dark: theme(DARK, true) },
    },
    icons: { defaultSet: 'mdi', aliases, sets: { mdi } },
    display: { thresholds: { xs: 0, sm: 600, md: 960, lg: 1280, xl: 1600, xxl: 1920 } },
    defaults: {
      VBtn: { variant: 'flat', elevation: 0, rounded: 'md', ripple: false, height: 44 },
      VTextField: { variant: 'outlined', density: 'comfortable', hideDetails: 'auto', rounded: 'md' },
      VTextarea: { variant: 'outlined', density: 'comfortable', hideDetails: 'auto', rounded: 'md' },
      VSelect: { variant: 'outlined', density: 'comfortable', hideDetails: 'auto', rounded: 'md' },
      VDialog: { maxWidth: 520, scrollable: true },
      VMenu: { offset: 6 },
      VTooltip: { location: 'bottom', openDelay: 400 },
      VSnackbar: { location: 'bottom', timeout: 6_000 },
    },
  })
