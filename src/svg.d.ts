/** The build reads `.svg` files as text, so that icons ship inside the code that shows them. */
declare module '*.svg' {
  const markup: string;
  export default markup;
}
