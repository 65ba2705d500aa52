/** The browser bundle carries the module inside, as bytes. */
declare module '*.wasm' {
  const bytes: Uint8Array
  export default bytes
}

/** The global scope of the worker that the browser edition's server runs in, as far as it is used. */
interface DedicatedWorkerGlobalScope extends Worker {}
