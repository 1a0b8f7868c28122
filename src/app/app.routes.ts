import type {Routes} from '@angular/router';
import {sessionGuard} from './session/session-guard';

export const routes: Routes = [
  {
    path: 'sign-in',
    title: 'Sign in',
    loadComponent: () => import('./session/sign-in-page').then(page => page.SignInPage),
  },
  {
    path: 'welcome',
    title: 'Choose a password',
    loadComponent: () => import('./session/welcome-page').then(page => page.WelcomePage),
  },
  {
    path: '',
    loadComponent: () => import('./frame/frame').then(frame => frame.Frame),
    children: [
      {path: '', pathMatch: 'full', redirectTo: 'requests'},
      {
        path: 'requests',
        title: 'Requests',
        canActivate: [sessionGuard],
        loadComponent: () => import('./requests/requests-page').then(page => page.RequestsPage),
      },
      {
        path: 'usage',
        title: 'Usage',
        canActivate: [sessionGuard],
        loadComponent: () => import('./usage/usage-page').then(page => page.UsagePage),
      },
      {
        path: 'keys',
        title: 'Keys',
        canActivate: [sessionGuard],
        loadComponent: () => import('./keys/keys-page').then(page => page.KeysPage),
      },
      {
        path: 'reference',
        loadChildren: () =>
          import('./reference/reference.routes').then(file => file.referenceRoutes),
      },
      {
        path: 'no-answer',
        title: 'No answer',
        loadComponent: () => import('./states/no-answer-page').then(page => page.NoAnswerPage),
      },
      {
        path: '**',
        title: 'Not found',
        loadComponent: () => import('./states/not-found-page').then(page => page.NotFoundPage),
      },
    ],
  },
];
