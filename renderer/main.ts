import { createPinia } from 'pinia'
import { createApp } from 'vue'
import { AppError } from '../app/contract/errors.ts'
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
const notices = useNotices()

api.on('task', tasks.take)
api.on('changed', ({ noun }) => {
  if (noun === 'settings') void settings.load()
  else void project.load()
})
api.onReachable((isReachable) => {
  project.isReachable = isReachable
})

/** What nobody expected is told, too: it must not look as if nothing had happened. */
function tellFault(fault: unknown): void {
  if (fault instanceof AppError) notices.tell('bad', 'That did not work', fault.message)
  else
    notices.tell(
      'bad',
      'A fault in Tallycut itself',
      `What had been saved is kept. It says: ${String(fault)}`,
    )
}
app.config.errorHandler = tellFault
window.addEventListener('unhandledrejection', ({ reason }) => tellFault(reason))

const started = await notices.attempt('Tallycut could not be reached', () =>
  Promise.all([settings.load(), project.load(), project.loadInfo(), tasks.load()]),
)
if (started === undefined) project.isReachable = false
app.mount('#app')
