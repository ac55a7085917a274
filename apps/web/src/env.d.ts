/// <reference types="vite/client" />

declare module 'virtual:icons.css'
declare module 'vuetify/styles/layers'
declare module 'vuetify/styles/core'
