/** A compiled module's bytes; the bundler puts them into the script. */
declare module '*.wasm' {
  const bytes: Uint8Array<ArrayBuffer>;
  export default bytes;
}
