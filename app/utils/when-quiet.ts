/** Resolves when the page is loaded and has fetched nothing for a while: what can wait does not hold up what is looked at. */
export async function whenQuiet(milliseconds: number): Promise<void> {
  let last = performance.now()
  const observer = typeof PerformanceObserver === 'function' ? new PerformanceObserver(() => last = performance.now()) : null
  observer?.observe({ type: 'resource' })
  await new Promise<void>((done) => {
    const timer = setInterval(() => {
      if (document.readyState !== 'complete' || performance.now() - last < milliseconds) return
      clearInterval(timer)
      done()
    }, 250)
  })
  observer?.disconnect()
}
