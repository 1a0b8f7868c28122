import {HttpErrorResponse, type HttpInterceptorFn} from '@angular/common/http';
import {inject} from '@angular/core';
import {Router} from '@angular/router';
import {catchError, throwError} from 'rxjs';
import {Session} from './session';

const SAFE_METHODS = ['GET', 'HEAD', 'OPTIONS'];

/** Proves to the service that changes come from this console, and notices when the session has ended. */
export const sessionInterceptor: HttpInterceptorFn = (request, next) => {
  if (!request.url.startsWith('/console/')) return next(request);
  const session = inject(Session);
  const router = inject(Router);
  const token = session.csrfToken();
  const sent =
    token === null || SAFE_METHODS.includes(request.method)
      ? request
      : request.clone({setHeaders: {'X-CSRF-Token': token}});
  return next(sent).pipe(
    catchError((error: unknown) => {
      const hasEnded = error instanceof HttpErrorResponse && error.status === 401;
      if (hasEnded && session.person() !== null && request.url !== '/console/session') {
        session.forget();
        void router.navigate(['/sign-in'], {queryParams: {returnTo: router.url, ended: true}});
      }
      return throwError(() => error);
    }),
  );
};
