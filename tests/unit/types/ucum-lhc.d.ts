/** The part of @lhncbc/ucum-lhc that the tests use: an independent library to check our UCUM codes against. */
declare module '@lhncbc/ucum-lhc' {
  interface Utils { validateUnitString: (code: string) => { status: 'valid' | 'invalid' | 'error', ucumCode: string | null } }
  const library: { UcumLhcUtils: { getInstance: () => Utils } }
  export default library
}
