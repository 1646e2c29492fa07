import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { choleskyInPlace } from "../../src/math/cholesky.ts";
import { randomStream } from "../../src/math/random.ts";
import { weightedL1 } from "../../src/solve/penalty.ts";
import { minimiseQuadratic } from "../../src/solve/quadratic.ts";
import { roomsFor } from "../../src/solve/room.ts";

describe("the penalised quadratic", () => {
  test("optimality conditions hold exactly, nearly equal columns and any start included (property)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 1, max: 10 }),
        fc.nat(100_000),
        fc.double({ min: 0, max: 20, noNaN: true }),
        fc.constantFrom(1, 0.1, 1e-3, 1e-5),
        (m, seed, lambda, apart) => {
          const random = randomStream(seed, "quadratic", m);
          // columns that share a factor and differ by `apart`
          const rows = Array.from({ length: m + 6 }, () => {
            const shared = random.normal();
            return Array.from({ length: m }, () => shared + apart * random.normal());
          });
          const curvature = new Float64Array(m * m);
          for (let a = 0; a < m; a++)
            for (let b = 0; b < m; b++)
              curvature[a * m + b] = rows.reduce((sum, row) => sum + row[a] * row[b], 0);
          const gradient = Float64Array.from({ length: m }, () => 10 * random.normal());
          const x = Float64Array.from({ length: m }, () => (random.uniform() < 0.5 ? 0 : random.normal()));
          const weights = Float64Array.from({ length: m }, (_, k) => (k === 0 ? 0 : 0.2 + random.uniform()));
          const penalty = weightedL1(lambda, weights);
          const which = Int32Array.from({ length: m }, (_, k) => k);
          const factor = Float64Array.from(curvature);
          // near the edge of double precision the solver damps the curvature instead
          const factored = choleskyInPlace(factor, m, 1e-11);
          const z =
            seed % 2 === 0 || !factored
              ? minimiseQuadratic({ which, x, gradient, curvature }, penalty)
              : minimiseQuadratic({ which, x, gradient, curvature, factor }, penalty, roomsFor(m)).slice(
                  0,
                  m,
                );
          const size = Math.max(...curvature) * Math.max(1, ...z.map(Math.abs), ...x.map(Math.abs));
          for (let a = 0; a < m; a++) {
            let slope = gradient[a];
            for (let b = 0; b < m; b++) slope += curvature[a * m + b] * (z[b] - x[b]);
            // rounding of the sums above sets the scale
            expect(penalty.distance(a, z[a], slope)).toBeLessThan(1e-10 * (10 + size));
          }
        },
      ),
      { numRuns: 500 },
    );
  });
});
