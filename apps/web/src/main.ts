import '@fontsource/roboto/latin-400.css'
import '@fontsource/roboto/latin-500.css'
import '@fontsource/roboto/latin-700.css'
import { createPinia } from 'pinia'
import { createApp } from 'vue'
import App from './App.vue'
import { i18n } from './plugins/i18n'
import { createTheme } from './plugins/vuetify'
import './assets/tokens.css'
import './assets/base.css'
import { followSession, router } from './router'
import { followPages } from './router/pages'

const app = createApp(App).use(createPinia()).use(i18n).use(createTheme())
followSession()
followPages(router)
app.use(router).mount('#app')
