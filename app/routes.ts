import { index, layout, prefix, type RouteConfig, route } from '@react-router/dev/routes'

export default [
  route('sign-in', 'routes/account/sign-in.tsx'),
  route('sign-out', 'routes/account/sign-out.ts'),
  route('room-light', 'routes/account/room-light.ts'),

  layout('routes/signed-in.tsx', [
    index('routes/home.ts'),
    route('account', 'routes/account/account.tsx'),
    route('hall', 'routes/hall/hall.tsx'),
    route('make-safe', 'routes/hall/make-safe.ts'),

    ...prefix('benches/:benchId', [
      index('routes/benches/bench.tsx'),
      route('cautions', 'routes/benches/cautions.tsx'),
      route('log', 'routes/benches/log.tsx'),
      route('planner', 'routes/benches/planner.tsx'),
      route('stability', 'routes/benches/stability.tsx'),
      route('relation', 'routes/benches/relation.tsx'),
      route('commands', 'routes/benches/commands.ts'),
      route('runs', 'routes/benches/runs.ts'),
      route('readings', 'routes/benches/readings.ts'),
      route('checklist', 'routes/benches/checklist.ts'),
      route('typed-readings', 'routes/benches/typed-readings.ts'),
      route('readings/:readingId/edges', 'routes/benches/edges.ts'),
      route('readings/:readingId/photo', 'routes/benches/photo.tsx'),
      route('readings/:readingId/photos/:photoId', 'routes/benches/photo-picture.ts'),
      route('readings/:readingId/photos/:photoId/measurements', 'routes/benches/photo-measurements.ts'),
      route('readings/:readingId/strike', 'routes/benches/strike.ts'),
    ]),

    route('runs', 'routes/runs/runs.tsx'),
    route('runs/import', 'routes/runs/import.tsx'),
    ...prefix('runs/:runId', [
      route('imported', 'routes/runs/imported.tsx'),
      route('analysis', 'routes/runs/analysis.tsx'),
      route('plan', 'routes/runs/plan.ts'),
      route('statement', 'routes/runs/statement.ts'),
    ]),

    route('api/tickets', 'routes/api/tickets.ts'),
  ]),

  route('api/health', 'routes/api/health.ts'),
  route('api/bridge/configuration', 'routes/api/bridge-configuration.ts'),
  route('api/bridge/spool', 'routes/api/bridge-spool.ts'),

  route('*', 'routes/not-found.tsx'),
] satisfies RouteConfig
