import { it } from "vitest";
import { sweep, sweepOptions } from "../../src/studies/sweep.js";
import { writeSample } from "../../src/samples/write.js";
import { buildSample } from "../../src/samples/catalogue.js";
import { mkdtempSync } from "node:fs";
const go = async (name: string, set: any, divisions: any, offset: any, options: any, hessian?: boolean) => {
  const d = mkdtempSync("/tmp/zz-") + "/g";
  writeSample(buildSample(name, set), { divisions, offset, directory: d, hessian } as any);
  const t0 = performance.now();
  const r = await sweep(d, sweepOptions.parse(options), { workers: 1 });
  const rows = r.responses.map((x) => `${x.name} ` + x.temperature_K + x.value.map((row: any, t: number) => row.map((v: number, i: number) => `${v.toPrecision(7)}+-${x.error[t][i].toPrecision(2)}(pts ${x.points[t][i].toPrecision(5)})`).join(" ")).join(" | "));
  console.log(name, JSON.stringify(set), divisions, offset, `${((performance.now() - t0) / 1000).toFixed(2)} s samples ${r.sampling.samples} deepest ${r.sampling.deepest} split ${r.sampling.cells_split} unres ${r.sampling.unresolved}\n`, rows.join("\n "));
};
it("x", async () => {
  for (const D of ["0.3", "0.03", "0.003"])
    await go("dirac", { mass: D, box: "3" }, [24, 24, 1], [0.3, 0.4, 0], { response: ["charge:xy"], from: 0, to: 0, points: 1, temperature: [0, 10] });
  for (const n of [8, 12, 16]) await go("haldane", {}, [n, n, 1], [0, 0, 0], { response: ["charge:xy"], from: -1, to: 1, points: 5, temperature: [0, 580.226] });
  for (const n of [8, 12, 16]) await go("kane-mele", {}, [n, n, 1], [0, 0, 0], { response: ["spin:xy:z"], from: -0.5, to: 0.5, points: 11, temperature: [0, 348.1356] });
  for (const n of [6, 8]) await go("metal", { xi: "0.0001" }, [n, n, n], [0, 0, 0], { response: ["spin:xy:z"], from: 0, to: 0, points: 1, temperature: [300] });
});
