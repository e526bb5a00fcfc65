import { spawnSync } from 'node:child_process'
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs'
import { join } from 'node:path'

const resultsDir = 'test-results'
rmSync(resultsDir, { recursive: true, force: true })
mkdirSync(resultsDir, { recursive: true })

const counts = { passed: 0, failed: 0, skipped: 0 }

function run(name: string, command: string, args: string[], env: Record<string, string> = {}) {
  console.log(`\n── ${name}`)
  const started = Date.now()
  const { status } = spawnSync(command, args, { stdio: 'inherit', env: { ...process.env, ...env } })
  console.log(
    `── ${name}: ${status === 0 ? 'passed' : 'FAILED'} in ${((Date.now() - started) / 1000).toFixed(0)} s`,
  )
  return status === 0
}

function step(name: string, command: string, args: string[]) {
  if (run(name, command, args)) counts.passed += 1
  else counts.failed += 1
}

/** Runs a test runner and adds what its report counts. A runner that fails without a failed test counts as one. */
function tests(
  name: string,
  args: string[],
  report: string,
  read: (json: never) => [number, number, number],
) {
  const isGood = run(name, 'npx', args)
  const [passed, failed, skipped] = existsSync(report)
    ? read(JSON.parse(readFileSync(report, 'utf8')) as never)
    : ([0, 0, 0] as const)
  counts.passed += passed
  counts.failed += !isGood && failed === 0 ? 1 : failed
  counts.skipped += skipped
}

/** The browser and the pseudo-terminals come from the system's packages. */
function install() {
  const wanted = [
    ['chromium', process.env.CHROMIUM ?? '/usr/bin/chromium'],
    ['socat', '/usr/bin/socat'],
  ] as const
  const missing = wanted.filter(([, path]) => !existsSync(path)).map(([name]) => name)
  if (missing.length === 0) return
  run('package lists', 'apt-get', ['update', '-qq'])
  run(`install ${missing.join(', ')}`, 'apt-get', ['install', '-y', '-qq', ...missing], {
    DEBIAN_FRONTEND: 'noninteractive',
  })
}

install()
step('types', 'npm', ['run', '--silent', 'typecheck'])
step('lint', 'npm', ['run', '--silent', 'lint'])
step('build', 'npm', ['run', '--silent', 'build'])

const unitReport = join(resultsDir, 'unit.json')
tests(
  'unit and integration tests',
  [
    'vitest',
    'run',
    '--config',
    'tests/vitest.config.ts',
    '--reporter=default',
    '--reporter=json',
    `--outputFile.json=${unitReport}`,
  ],
  unitReport,
  (json: {
    numPassedTests: number
    numFailedTests: number
    numPendingTests: number
    numTodoTests: number
  }) => [json.numPassedTests, json.numFailedTests, json.numPendingTests + json.numTodoTests],
)
const browserReport = join(resultsDir, 'browser.json')
tests(
  'browser tests',
  ['playwright', 'test', '--config', 'tests/playwright.config.ts'],
  browserReport,
  (json: { stats: { expected: number; unexpected: number; flaky: number; skipped: number } }) => [
    json.stats.expected,
    json.stats.unexpected + json.stats.flaky,
    json.stats.skipped,
  ],
)

console.log(`\n${counts.passed} passed, ${counts.failed} failed, ${counts.skipped} skipped`)
process.exit(counts.failed === 0 ? 0 : 1)
