const LATEST_MS = 100
/** Browsers that do not say when they are free: after the frame that is under way. */
const USUAL_MS = 24

/** Resolves in a task of its own when the browser has drawn what there is to draw and no key waits; in a tenth of a second at the latest. */
export function whenFree(): Promise<void> {
  return new Promise((done) => {
    if (typeof requestIdleCallback === 'function') requestIdleCallback(() => done(), { timeout: LATEST_MS })
    else setTimeout(done, USUAL_MS)
  })
}
