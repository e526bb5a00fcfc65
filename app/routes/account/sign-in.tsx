import { useRef } from 'react'
import { data, Form, redirect, useNavigation } from 'react-router'
import { knownBrowserCookie } from '../../auth/known-browser.server.ts'
import { localPath } from '../../auth/local-path.ts'
import { readForm } from '../../auth/request-body.server.ts'
import { getPerson, startSession } from '../../auth/sessions.server.ts'
import { authenticator, SignInError } from '../../auth/sign-in.server.ts'
import { Mark } from '../../components/mark.tsx'
import { RoomLightSwitch } from '../../components/room-light.tsx'
import { TextField } from '../../components/text-field.tsx'
import { databaseContext } from '../../context.ts'
import { demoAccounts } from '../../db/demo-accounts.server.ts'
import { environment } from '../../env.server.ts'
import type { Route } from './+types/sign-in'

export async function loader({ request, context }: Route.LoaderArgs) {
  if (await getPerson(context.get(databaseContext), request))
    throw redirect(localPath(new URL(request.url).searchParams.get('returnTo')))
  return { demoAccounts: environment().DEMO ? demoAccounts : null }
}

export async function action({ request }: Route.ActionArgs) {
  const form = await readForm(request.clone())
  try {
    const { id, email } = await authenticator.authenticate('form', request)
    const headers = new Headers()
    headers.append('Set-Cookie', await startSession(id, request))
    headers.append('Set-Cookie', await knownBrowserCookie(request, email))
    return redirect(localPath(new URL(request.url).searchParams.get('returnTo')), { headers })
  } catch (error) {
    if (!(error instanceof SignInError)) throw error
    return data({ errors: error.errors, email: String(form.get('email') ?? '') }, { status: error.status })
  }
}

export default function SignIn({ loaderData, actionData }: Route.ComponentProps) {
  const form = useRef<HTMLFormElement>(null)
  const isBusy = useNavigation().state !== 'idle'

  function fill(account: { email: string; password: string }) {
    for (const [name, value] of Object.entries(account)) {
      const field = form.current?.elements.namedItem(name)
      if (field instanceof HTMLInputElement) field.value = value
    }
  }

  return (
    <main className="mx-auto grid max-w-lg gap-6 px-4 pt-16 pb-10">
      <title>Sign in · Coilside</title>
      <header className="flex items-center justify-between">
        <h1 className="flex items-center gap-2 text-xl font-bold">
          <Mark /> Coilside
        </h1>
        <RoomLightSwitch />
      </header>
      <Form method="post" ref={form} className="grid gap-4" noValidate>
        <TextField
          label="E-mail"
          name="email"
          type="email"
          autoComplete="username"
          defaultValue={actionData?.email}
          errors={actionData?.errors.email}
        />
        <TextField
          label="Password"
          name="password"
          type="password"
          autoComplete="current-password"
          errors={actionData?.errors.password}
        />
        <button type="submit" className="button button-main" disabled={isBusy}>
          Sign in
        </button>
      </Form>
      {loaderData.demoAccounts && <DemoAccounts accounts={loaderData.demoAccounts} onChoose={fill} />}
    </main>
  )
}

type Account = { email: string; password: string; role: string; does: string }

function DemoAccounts({ accounts, onChoose }: { accounts: Account[]; onChoose: (account: Account) => void }) {
  return (
    <section aria-labelledby="demo-accounts" className="grid gap-3 border-t border-rule pt-5">
      <h2 id="demo-accounts" className="font-medium">
        Accounts of this demo
      </h2>
      <ul className="grid gap-2">
        {accounts.map((account) => (
          <li
            key={account.email}
            className="grid grid-cols-[1fr_auto] items-center gap-x-3 border-b border-rule pb-2"
          >
            <span>
              <b className="font-medium">{account.role}</b>{' '}
              <span className="text-ink-soft">{account.does}</span>
              <br />
              <span className="text-[12.5px] text-ink-soft">
                <span className="whitespace-nowrap">{account.email}</span> ·{' '}
                <span className="whitespace-nowrap">{account.password}</span>
              </span>
            </span>
            <button
              type="button"
              className="button"
              onClick={() => onChoose(account)}
              aria-label={`Fill in ${account.email}`}
            >
              Fill in
            </button>
          </li>
        ))}
      </ul>
    </section>
  )
}
