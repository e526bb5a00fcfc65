import { existsSync } from 'node:fs'
import { startProcess } from '#tests/support/processes.ts'

/** Production: the app and this room's bridge from the build. Each refuses to start on the default secrets. */
if (existsSync('.env')) process.loadEnvFile('.env')
if (!existsSync('build/server/index.js')) throw new Error('Run `npm run build` first.')

const env = { NODE_ENV: 'production' }
const bridge = startProcess('bridge', ['build/bridge/main.js'], { env, isLoud: true })
const app = startProcess('app', ['node_modules/@react-router/serve/bin.js', 'build/server/index.js'], {
  env,
  isLoud: true,
})

let isEnding = false
async function end(code: number) {
  if (isEnding) return
  isEnding = true
  await bridge.stop()
  await app.stop()
  process.exit(code)
}
process.on('SIGINT', () => end(0))
process.on('SIGTERM', () => end(0))
// A bridge keeps its benches safe without the app, so the app's end does not take the bridge down.
bridge.child.on('exit', () => end(1))
app.child.on('exit', (code) => !isEnding && console.error(`The app ended (${code}). The bridge goes on.`))
