import { getFormProps, getInputProps, useForm } from '@conform-to/react'
import { parseWithZod } from '@conform-to/zod/v4'
import { data, Form, href, useNavigation } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { PageFrame } from '../../components/page-frame.tsx'
import { TextField } from '../../components/text-field.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { changePassword } from '../../people/change-password.server.ts'
import { passwordSchema } from '../../people/password-form.ts'
import type { Route } from './+types/account'

export function loader({ context }: Route.LoaderArgs) {
  const { name, email, role } = context.get(personContext)
  return { name, email, role }
}

export async function action({ request, context }: Route.ActionArgs) {
  const submission = parseWithZod(await readForm(request), { schema: passwordSchema })
  if (submission.status !== 'success')
    return data({ result: submission.reply(), changed: false }, { status: 400 })
  const { current, next } = submission.value
  const person = context.get(personContext)
  const refusal = await changePassword(context.get(databaseContext), { person, current, next })
  if (refusal) {
    const result = submission.reply({ fieldErrors: { current: [refusal] } })
    return data({ result, changed: false }, { status: 400 })
  }
  return { result: submission.reply({ resetForm: true }), changed: true }
}

export default function Account({ loaderData, actionData }: Route.ComponentProps) {
  const isBusy = useNavigation().state !== 'idle'
  const [form, fields] = useForm({
    lastResult: actionData?.result,
    onValidate: ({ formData }) => parseWithZod(formData, { schema: passwordSchema }),
    shouldValidate: 'onBlur',
    shouldRevalidate: 'onInput',
  })

  return (
    <PageFrame where={<h1 className="font-medium">Account</h1>}>
      <title>Account · Coilside</title>
      <div className="grid max-w-md gap-8">
        <section className="grid gap-1">
          <p>
            <b className="font-medium">{loaderData.name}</b>{' '}
            <span className="text-ink-soft">{loaderData.role}</span>
          </p>
          <p className="text-ink-soft">{loaderData.email}</p>
          <Form method="post" action={href('/sign-out')} className="mt-3">
            <button type="submit" className="button">
              Sign out
            </button>
          </Form>
        </section>

        <section aria-labelledby="password" className="border-t border-rule pt-5">
          <h2 id="password" className="mb-3 font-medium">
            Change the password
          </h2>
          <Form method="post" {...getFormProps(form)} className="grid gap-4">
            <TextField
              label="Present password"
              autoComplete="current-password"
              {...withoutKey(getInputProps(fields.current, { type: 'password' }))}
              errors={fields.current.errors}
            />
            <TextField
              label="New password"
              autoComplete="new-password"
              hint="At least 12 characters. Your other sessions end."
              {...withoutKey(getInputProps(fields.next, { type: 'password' }))}
              errors={fields.next.errors}
            />
            <TextField
              label="New password once more"
              autoComplete="new-password"
              {...withoutKey(getInputProps(fields.again, { type: 'password' }))}
              errors={fields.again.errors}
            />
            <button type="submit" className="button button-main" disabled={isBusy}>
              Change the password
            </button>
          </Form>
          <p role="status" className="mt-3">
            {actionData?.changed && 'The password is changed. Your other sessions have ended.'}
          </p>
        </section>
      </div>
    </PageFrame>
  )
}

/** The name and the default only: the field sets its own id and its own descriptions. */
function withoutKey({ name, type, defaultValue }: { name: string; type: string; defaultValue?: string }) {
  return { name, type, defaultValue }
}
