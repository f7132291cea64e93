import { createBrowserRouter, Navigate, type RouteObject } from 'react-router-dom'
import { NotFoundPage } from '#client/routes/not-found.tsx'
import { ErrorPage } from './error-page.tsx'
import { RootLayout } from './root-layout.tsx'

/**
 * Every page but the frame is loaded when it is first opened. Each layout has an error element of its own, so that a
 * failure replaces the smallest possible area.
 */
const visitorPlan = async () => ({
  Component: (await import('#client/routes/plan/visitor-plan.tsx')).VisitorPlanPage,
})
const channelPlan = async () => ({
  Component: (await import('#client/routes/plan/channel-plan.tsx')).ChannelPlanPage,
})

const project: RouteObject = {
  path: 'projects/:project',
  lazy: async () => ({ Component: (await import('#client/routes/project-layout.tsx')).ProjectLayout }),
  errorElement: <ErrorPage />,
  children: [
    { index: true, element: <Navigate to="channels" replace /> },
    {
      path: 'channels',
      errorElement: <ErrorPage />,
      lazy: async () => ({ Component: (await import('#client/routes/channels.tsx')).ChannelsPage }),
    },
    {
      path: 'channels/new',
      lazy: async () => ({ Component: (await import('#client/routes/channel-new.tsx')).NewChannelPage }),
    },
    {
      path: 'settings',
      lazy: async () => ({
        Component: (await import('#client/routes/project-settings.tsx')).ProjectSettingsPage,
      }),
    },
  ],
}

export const routes: RouteObject[] = [
  {
    path: '/',
    element: <RootLayout />,
    // The first page is loaded while nothing stands yet; it is there within a few hundred milliseconds.
    hydrateFallbackElement: <></>,
    errorElement: <ErrorPage framed />,
    children: [
      {
        errorElement: <ErrorPage />,
        children: [
          { index: true, lazy: visitorPlan },
          { path: 'plan', element: <Navigate to="/plan/measurand" replace /> },
          { path: 'plan/:step', lazy: visitorPlan },
          {
            path: 'sign-in',
            lazy: async () => ({ Component: (await import('#client/routes/sign-in.tsx')).SignInPage }),
          },
          {
            path: 'join',
            lazy: async () => ({ Component: (await import('#client/routes/join.tsx')).JoinPage }),
          },
          {
            path: 'help',
            lazy: async () => ({ Component: (await import('#client/routes/help.tsx')).HelpPage }),
          },
          {
            path: 'help/keys',
            lazy: async () => ({ Component: (await import('#client/routes/help-keys.tsx')).HelpKeysPage }),
          },
          {
            path: 'account/units',
            lazy: async () => ({
              Component: (await import('#client/routes/preferences.tsx')).PreferencesPage,
            }),
          },
          {
            path: 'w/:workspace',
            lazy: async () => ({
              Component: (await import('#client/routes/workspace-layout.tsx')).WorkspaceLayout,
            }),
            errorElement: <ErrorPage />,
            children: [
              { index: true, element: <Navigate to="projects" replace /> },
              {
                path: 'projects',
                lazy: async () => ({ Component: (await import('#client/routes/projects.tsx')).ProjectsPage }),
              },
              {
                path: 'projects/new',
                lazy: async () => ({
                  Component: (await import('#client/routes/project-new.tsx')).NewProjectPage,
                }),
              },
              {
                path: 'projects/:project/channels/:channel',
                errorElement: <ErrorPage />,
                children: [
                  { index: true, element: <Navigate to="plan/measurand" replace /> },
                  { path: 'plan', element: <Navigate to="measurand" replace /> },
                  { path: 'plan/:step', lazy: channelPlan },
                ],
              },
              project,
            ],
          },
          { path: '*', element: <NotFoundPage /> },
        ],
      },
    ],
  },
]

export const router = createBrowserRouter(routes)
