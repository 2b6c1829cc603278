declare module 'pdfjs-dist/legacy/build/pdf.worker.mjs'
declare module '*.wasm' {
  const bytes: Uint8Array
  export default bytes
}
