import type {Routes} from '@angular/router';

export const referenceRoutes: Routes = [
  {
    path: '',
    loadComponent: () => import('./reference-frame').then(file => file.ReferenceFrame),
    children: [
      {
        path: '',
        pathMatch: 'full',
        title: 'Reference',
        loadComponent: () => import('./overview-page').then(file => file.OverviewPage),
      },
      {
        path: 'units',
        title: 'Units and frames',
        loadComponent: () => import('./units-page').then(file => file.UnitsPage),
      },
      {
        path: 'accuracy',
        title: 'Accuracy and cautions',
        loadComponent: () => import('./accuracy-page').then(file => file.AccuracyPage),
      },
      {
        path: 'limits',
        title: 'Cost and limits',
        loadComponent: () => import('./limits-page').then(file => file.LimitsPage),
      },
      {
        path: 'errors',
        title: 'Errors',
        loadComponent: () => import('./errors-page').then(file => file.ErrorsPage),
      },
    ],
  },
];
