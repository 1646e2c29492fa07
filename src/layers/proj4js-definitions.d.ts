/** The table of the EPSG data set's systems; the package ships no types. */
declare module "proj4js-definitions" {
  const definitions: readonly (readonly [code: string, definition: string])[];
  export default definitions;
}
