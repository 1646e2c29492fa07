import type { Pair } from "../grid.ts";
import type { System } from "../system.ts";
import type { RotatedPole } from "./grid-mapping.ts";

const RADIANS = Math.PI / 180;

/**
 * Longitude and latitude of a rotated pole (CF-1.11 appendix F, rotated_latitude_longitude) against true ones. With the
 * grid's north pole at (φp, λp), θ the rotated latitude and β the rotated longitude less that of the true pole:
 * sin φ = sin φp sin θ + cos φp cos θ cos β, and so on by spherical trigonometry. Rotated longitudes are given within
 * half a turn of `middle`, that of the grid.
 */
export function rotatedSystem({ latitude, longitude, turn }: RotatedPole, middle: number): System {
  const [sinPole, cosPole] = [Math.sin(latitude * RADIANS), Math.cos(latitude * RADIANS)];
  const toLonLat = (x: number, y: number): Pair => {
    const [sinY, cosY] = [Math.sin(y * RADIANS), Math.cos(y * RADIANS)];
    const [sinX, cosX] = [Math.sin((x - turn) * RADIANS), Math.cos((x - turn) * RADIANS)];
    const along = cosPole * sinY - sinPole * cosY * cosX;
    const lon = longitude + Math.atan2(-cosY * sinX, along) / RADIANS;
    return [lon - 360 * Math.round(lon / 360), degrees(sinPole * sinY + cosPole * cosY * cosX)];
  };
  const fromLonLat = (lon: number, lat: number): Pair => {
    const [sinLat, cosLat] = [Math.sin(lat * RADIANS), Math.cos(lat * RADIANS)];
    const away = (lon - longitude) * RADIANS;
    const x =
      turn +
      Math.atan2(-cosLat * Math.sin(away), cosPole * sinLat - sinPole * cosLat * Math.cos(away)) / RADIANS;
    return [
      x + 360 * Math.round((middle - x) / 360),
      degrees(sinPole * sinLat + cosPole * cosLat * Math.cos(away)),
    ];
  };
  return {
    label: `longitude and latitude of a pole at ${longitude}, ${latitude}`,
    definition: `+proj=ob_tran +o_proj=longlat +o_lat_p=${latitude} +o_lon_p=${turn} +lon_0=${180 + longitude}`,
    from: "grid mapping of the file",
    geographic: true,
    rotated: true,
    plain: false,
    equalArea: false,
    metresPerUnit: Number.NaN,
    toLonLat,
    fromLonLat,
  };
}

/** The angle of a sine, which rounding may have put a hair beyond 1. */
function degrees(sine: number): number {
  return Math.asin(Math.max(-1, Math.min(1, sine))) / RADIANS;
}
