import {APP_BASE_HREF} from '@angular/common';
import {provideHttpClient, withFetch, withInterceptors} from '@angular/common/http';
import {provideBrowserGlobalErrorListeners, type ApplicationConfig} from '@angular/core';
import {MAT_FORM_FIELD_DEFAULT_OPTIONS} from '@angular/material/form-field';
import {TitleStrategy, provideRouter, withComponentInputBinding} from '@angular/router';
import {routes} from './app.routes';
import {PageTitles} from './page-titles';
import {sessionInterceptor} from './session/session-interceptor';

export const appConfig: ApplicationConfig = {
  providers: [
    provideBrowserGlobalErrorListeners(),
    provideRouter(routes, withComponentInputBinding()),
    provideHttpClient(withFetch(), withInterceptors([sessionInterceptor])),
    // The page's policy forbids <base>, so the router is told here where it lives.
    {provide: APP_BASE_HREF, useValue: '/'},
    {provide: TitleStrategy, useClass: PageTitles},
    {
      provide: MAT_FORM_FIELD_DEFAULT_OPTIONS,
      useValue: {
        appearance: 'outline',
        floatLabel: 'always',
        subscriptSizing: 'dynamic',
        hideRequiredMarker: true,
      },
    },
  ],
};
