/**
 * The class that a CommonJS module gives by default: bundled and loaded directly it arrives either as itself or as a
 * property named `default` of the module.
 */
export function classOf<Class>(module: Class): Class {
  return typeof module === 'function' ? module : (module as { default: Class }).default
}
