import { spawnSync } from 'node:child_process'
import { join } from 'node:path'
import { demoAccounts } from '#app/db/demo-accounts.server.ts'
import { startSite } from '#tests/support/site.ts'

const isDev = process.argv.includes('--dev')
const host = process.env.HOST ?? '127.0.0.1'
const port = Number(process.env.PORT ?? 3000)

if (!isDev) {
  console.log('Building…')
  const build = spawnSync('npm', ['run', '--silent', 'build'], { encoding: 'utf8' })
  if (build.status !== 0) {
    console.error(build.stdout + build.stderr)
    process.exit(1)
  }
}

console.log('Starting simulator, app, bridge and mail catcher…')
const site = await startSite({
  dataDir: join('.data', 'demo'),
  ports: {
    app: port,
    bridge: Number(process.env.BRIDGE_PORT ?? 4310),
    mail: Number(process.env.SMTP_PORT ?? 2525),
  },
  host,
  isDev,
  onMail: ({ to, subject }) => console.log(`Mail to ${to}: ${subject}`),
  isLoud: isDev || process.argv.includes('--loud'),
})

const width = Math.max(...demoAccounts.map(({ email }) => email.length))
console.log(`
Coilside is at ${site.url}${host === '0.0.0.0' ? ` (and at this machine's address, port ${port})` : ''}

Accounts of the demo:
${demoAccounts.map(({ role, email, password }) => `  ${role.padEnd(10)}  ${email.padEnd(width)}  ${password}`).join('\n')}

Three virtual benches, and one without ports. Ctrl+C ends it: the bridge commands every output off first.`)

let isEnding = false
async function end() {
  if (isEnding) return
  isEnding = true
  await site.close()
  process.exit(0)
}
process.on('SIGINT', end)
process.on('SIGTERM', end)
for (const { name, child, output } of Object.values(site.processes))
  child.on('exit', () => {
    if (isEnding) return
    console.error(`The ${name} ended by itself:\n${output().slice(-2000)}`)
    void end()
  })
