import {provideHttpClient, withInterceptors} from '@angular/common/http';
import {HttpTestingController, provideHttpClientTesting} from '@angular/common/http/testing';
import {Component, inject} from '@angular/core';
import {TestBed} from '@angular/core/testing';
import {HttpClient} from '@angular/common/http';
import {Router, provideRouter} from '@angular/router';
import {RouterTestingHarness} from '@angular/router/testing';
import {Session} from './session';
import {safeReturnTo, sessionGuard} from './session-guard';
import {sessionInterceptor} from './session-interceptor';

@Component({template: 'page'})
class Page {}

const answer = {
  person: {
    id: '1',
    email: 'ines.halloran@aldervane.example',
    name: 'Ines Halloran',
    role: 'owner',
    account: {id: '2', name: 'Aldervane Coating'},
  },
  csrfToken: 'token',
};

function setUp(): {http: HttpTestingController; router: Router; session: Session} {
  TestBed.configureTestingModule({
    providers: [
      provideHttpClient(withInterceptors([sessionInterceptor])),
      provideHttpClientTesting(),
      provideRouter([
        {path: 'sign-in', component: Page},
        {path: 'no-answer', component: Page},
        {path: '**', component: Page, canActivate: [sessionGuard]},
      ]),
    ],
  });
  return {
    http: TestBed.inject(HttpTestingController),
    router: TestBed.inject(Router),
    session: TestBed.inject(Session),
  };
}

const settle = (): Promise<void> => new Promise(resolve => setTimeout(resolve));

describe('the session guard', () => {
  it('sends strangers to sign in and remembers where they wanted to go', async () => {
    const {http, router} = setUp();
    const arrived = RouterTestingHarness.create('/usage?range=today');
    await settle();
    http.expectOne('/console/session').flush(null, {status: 401, statusText: 'Unauthorized'});
    await arrived;
    expect(router.url).toBe('/sign-in?returnTo=%2Fusage%3Frange%3Dtoday');
  });

  it('lets the signed-in through, asking once', async () => {
    const {http, router} = setUp();
    const arrived = RouterTestingHarness.create('/usage');
    await settle();
    http.expectOne('/console/session').flush(answer);
    const harness = await arrived;
    await harness.navigateByUrl('/keys');
    http.expectNone('/console/session');
    expect(router.url).toBe('/keys');
  });

  it('says so where the service does not answer, and asks again the next time', async () => {
    const {http, router} = setUp();
    const arrived = RouterTestingHarness.create('/usage');
    await settle();
    http.expectOne('/console/session').flush(null, {status: 503, statusText: 'Unavailable'});
    const harness = await arrived;
    expect(router.lastSuccessfulNavigation()?.finalUrl?.toString()).toBe('/no-answer');

    const again = harness.navigateByUrl('/keys');
    await settle();
    http.expectOne('/console/session').flush(answer);
    await again;
    expect(router.url).toBe('/keys');
  });

  it('goes back to pages of this console only', () => {
    expect(safeReturnTo('/usage?range=today')).toBe('/usage?range=today');
    for (const address of [
      null,
      '',
      'https://elsewhere.example',
      '//elsewhere.example',
      '/\\elsewhere',
      '/sign-in',
    ]) {
      expect(safeReturnTo(address)).toBe('/');
    }
  });
});

describe('the session interceptor', () => {
  it('sends the token with changes and not with reading', async () => {
    const {http, session} = setUp();
    const client = TestBed.runInInjectionContext(() => inject(HttpClient));
    const signedIn = session.signIn('a@b.example', 'secret');
    http.expectOne('/console/session').flush(answer);
    await signedIn;

    client.post('/console/keys', {}).subscribe();
    client.get('/console/keys').subscribe();
    const [post, get] = http.match('/console/keys');
    expect(post.request.headers.get('X-CSRF-Token')).toBe('token');
    expect(get.request.headers.has('X-CSRF-Token')).toBe(false);
  });

  it('on 401 forgets the person and offers the way back', async () => {
    const {http, session, router} = setUp();
    const signedIn = session.signIn('a@b.example', 'secret');
    http.expectOne('/console/session').flush(answer);
    await signedIn;
    const client = TestBed.inject(HttpClient);
    await (await RouterTestingHarness.create()).navigateByUrl('/keys');

    client.get('/console/keys').subscribe({error: () => undefined});
    http.expectOne('/console/keys').flush(null, {status: 401, statusText: 'Unauthorized'});
    await settle();
    expect(session.person()).toBeNull();
    expect(router.url).toBe('/sign-in?returnTo=%2Fkeys&ended=true');
  });
});
