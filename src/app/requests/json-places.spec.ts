import {lineOf, placesOf, syntaxFault} from './json-places';

const text = `{
 "units": {"length": "mm"},
 "bodies": [
  {"id": "a", "charges": {"x": [1, 2], "y": [0]}},
  {"id": "b/c", "charges": {"x": [3]}}
 ]
}`;
const at = (pointer: string) => placesOf(text, [{pointer, detail: 'wrong'}])[0];

describe('places in a request', () => {
  it('a pointer to a member marks its name and value', () => {
    const place = at('/units/length');
    expect(place && text.slice(place.from, place.to)).toBe('"length": "mm"');
    expect(place && lineOf(text, place.from)).toBe(2);
  });

  it('a pointer to an item of an array marks the item', () => {
    const place = at('/bodies/1/charges/x/0');
    expect(place && text.slice(place.from, place.to)).toBe('3');
    expect(place && lineOf(text, place.from)).toBe(5);
  });

  it('a pointer to something missing marks what would hold it, on one line', () => {
    expect(at('/targets')?.from).toBe(0);
    expect(at('/targets')?.to).toBe(1);
    const body = at('/bodies/0/charges/charge');
    expect(body && lineOf(text, body.from)).toBe(4);
  });

  it('reads the escapes of pointers', () => {
    const [place] = placesOf('{"a/b": {"~": 1}}', [{pointer: '/a~1b/~0', detail: ''}]);
    expect(place?.from).toBe(9);
  });

  it('finds nothing in a text that is not JSON', () => {
    expect(placesOf('', [{pointer: '/a', detail: ''}])).toEqual([null]);
  });

  it('names what is missing, and where', () => {
    expect(syntaxFault(text)).toBeNull();
    expect(syntaxFault('{"a" 1}')).toEqual({from: 5, to: 6, message: 'A colon is missing'});
    expect(syntaxFault('{"a": 1 "b": 2}')).toMatchObject({from: 8, message: 'A comma is missing'});
    expect(syntaxFault('[1, 2')).toMatchObject({message: 'A closing bracket is missing'});
    expect(syntaxFault('{"a": NaN}')).toMatchObject({from: 6});
  });

  it('does not run out of stack on deep nesting', () => {
    expect(syntaxFault('['.repeat(1_000_000))).not.toBeNull();
  });
});
