import type {Routes} from '@angular/router';

export const referenceRoutes: Routes = [
  {
    path: '',
    title: 'Reference',
    loadComponent: () => import('../states/not-found-page').then(p => p.NotFoundPage),
  },
];
