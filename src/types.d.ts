/** The build's loader, and the tests' transform, give the text of the file. */
declare module '*.svg' {
  const text: string;
  export default text;
}
