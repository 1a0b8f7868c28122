import {HttpErrorResponse, HttpHeaders} from '@angular/common/http';
import {problemOf} from './problem';

const failure = (status: number, error: unknown): HttpErrorResponse =>
  new HttpErrorResponse({status, error, headers: new HttpHeaders({'X-Request-Id': 'req_1'})});

describe('a problem', () => {
  const document = {
    type: 'https://api.example/problems/unknown-unit',
    title: 'A unit is not known',
    status: 422,
    detail: 'Unknown unit "gauss"',
    code: 'unknown-unit',
    errors: [{pointer: '/units/field', code: 'unknown-unit', detail: 'Unknown unit "gauss"'}],
    errorCount: 3,
  };

  it('is read from a problem document, whether it came parsed or as text', () => {
    const expected = {
      status: 422,
      code: 'unknown-unit',
      title: 'A unit is not known',
      type: 'https://api.example/problems/unknown-unit',
      requestId: 'req_1',
      errors: document.errors,
      errorCount: 3,
    };
    expect(problemOf(failure(422, document))).toMatchObject(expected);
    expect(problemOf(failure(422, JSON.stringify(document)))).toMatchObject(expected);
  });

  it('is made up from the status where a proxy answers with a page of its own', () => {
    expect(problemOf(failure(502, '<html>'))).toMatchObject({
      code: 'http-502',
      title: 'The service answered 502',
      errors: [],
    });
  });

  it('says so where there was no answer', () => {
    expect(problemOf(failure(0, null))).toMatchObject({code: 'no-answer', requestId: null});
  });
});
