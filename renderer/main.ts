import { createPinia } from 'pinia'
import { createApp } from 'vue'
import { api } from './api/client.ts'
import App from './App.vue'
import './base.css'
import { useNotices } from './stores/notices.ts'
import { useProject } from './stores/project.ts'
import { useSettings } from './stores/settings.ts'
import { useTasks } from './stores/tasks.ts'

const app = createApp(App).use(createPinia())
const project = useProject()
const tasks = useTasks()
const settings = useSettings()

api.on('task', tasks.take)
api.on('changed', ({ noun }) => {
  if (noun === 'settings') void settings.load()
  else void project.load()
})
api.onReachable((isReachable) => {
  project.isReachable = isReachable
})

const started = await useNotices().attempt('Tallycut could not be reached', () =>
  Promise.all([settings.load(), project.load(), project.loadInfo(), tasks.load()]),
)
if (started === undefined) project.isReachable = false
app.mount('#app')
