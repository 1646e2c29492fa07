import type { RandomAccess } from "../../effects/effects.ts";
import { InputError } from "../../errors.ts";
import { isRemote } from "../remote.ts";
import { openClassic } from "./classic.ts";
import type { Dataset } from "./dataset.ts";
import { openHdf5 } from "./hdf5.ts";

const HDF5 = "\x89HDF\r\n\x1a\n";

/** True if a file begins as NetCDF does: "CDF" (classic), or the signature of HDF5. */
export function isNetcdf(file: RandomAccess): boolean {
  if (file.size < 8) return false;
  const head = String.fromCharCode(...file.read(0, 8));
  return head.startsWith("CDF") || head === HDF5;
}

/** Opens a NetCDF file of either format. Throws `layers.not-netcdf`, `layers.netcdf-address` and `layers.broken-file`. */
export async function openNetcdf(file: RandomAccess): Promise<Dataset> {
  if (isRemote(file))
    throw new InputError({
      name: "layers.netcdf-address",
      expected: "a NetCDF file below the data folder; of files at addresses, GeoTIFF is read",
      found: "a NetCDF file at an address",
      where: { file: file.path },
      remedy: "download it into the data folder, or use a cloud-optimised GeoTIFF",
    });
  if (!isNetcdf(file))
    throw new InputError({
      name: "layers.not-netcdf",
      expected: "a NetCDF file (it begins with CDF or the signature of HDF5)",
      found: `${file.size} bytes that begin otherwise`,
      where: { file: file.path },
      remedy: "name NetCDF files only; a failed download often leaves a web page or an empty file",
    });
  return file.read(0, 1)[0] === 0x43 ? openClassic(file) : openHdf5(file);
}
