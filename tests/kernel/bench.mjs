// bench.mjs: how many k points a second do the kernels treat at 18 bands? Run `npm run build` first, then node on this file.
//
// The least time of many short slices is given: on a shared machine anything else measures the neighbours.

import { createEigensolver } from "../../dist/kernel/eigen.js";
import { createLocalModel } from "../../dist/kernel/local.js";
import { createPairPass } from "../../dist/kernel/pair.js";
import { multiplyInto } from "../../dist/kernel/product.js";

const bands = Number(process.argv[2] ?? 18);
let state = 1;
const random = () => {
  state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
  return state / 2 ** 31 - 1;
};

function hermitian() {
  const a = new Float64Array(2 * bands * bands);
  for (let i = 0; i < bands; i++) {
    for (let j = 0; j <= i; j++) {
      const [re, im] = [random(), i === j ? 0 : random()];
      a.set([re, im], 2 * (i * bands + j));
      a.set([re, -im], 2 * (j * bands + i));
    }
  }
  return a;
}

const refer = () => ({ data: hermitian(), offset: 0 });
const points = Array.from({ length: 32 }, () => ({
  bands,
  energyEv: Float64Array.from({ length: bands }, (_, i) => i / 2 + random() / 5),
  energyOffset: 0,
  velocity: [refer(), refer(), refer()],
  moments: Array.from({ length: 6 }, refer),
  hessian: Array.from({ length: 6 }, refer),
}));

const first = [-1, 2, 5].map((moment) => ({ moment, flow: 0, field: 1 }));
const axes = [0, 1, 2];
const second = [-1, 0, 1, 2, 3, 4, 5].flatMap((moment) =>
  axes.flatMap((flow) => axes.map((field) => ({ moment, flow, field }))),
);
const plain = { degenerateEv: 1e-4, broadenEv: 0 };
const both = [plain, { degenerateEv: 1e-4, broadenEv: 0.3 }];
const out = new Float64Array(2 * 63 * bands);

function pairJob(products) {
  const pass = createPairPass(bands, products, plain);
  return (i) => pass.run(points[i % 32], out);
}

function localJob(products, hessian, denominators, reload) {
  const model = createLocalModel({ bands, hessian, products, denominators, directions: [0, 1, 2] });
  model.load(points[0]);
  return (i) => {
    if (i % reload === 0) model.load(points[(i / reload) % 32]);
    model.evaluate(0.01 * (i % 7), 0.02 * (i % 5), 0.01 * (i % 3), out);
  };
}

function eigenJob() {
  const solve = createEigensolver(bands);
  const matrix = hermitian();
  const matrices = points.map((point) => point.velocity[0].data);
  const values = new Float64Array(bands);
  const vectors = new Float64Array(2 * bands * bands);
  return (i) => {
    matrix.set(matrices[i % 32]);
    solve(matrix, values, vectors);
  };
}

const size = bands + (bands & 1);
const [a, b, c] = [0, 0, 0].map(() => new Float64Array(2 * size * size).fill(0.5));
const jobs = {
  "matrix product": () => multiplyInto(size, "full", a, 0, b, 0, c, 0),
  eigensolver: eigenJob(),
  "pair pass (i): charge, spin, orbital": pairJob(first),
  "pair pass (ii): 9 + 27 + 27": pairJob(second),
  "local model + (i), free-electron": localJob(first, "free-electron", [plain], 64),
  "local model + (i), free-electron, two denominators": localJob(first, "free-electron", both, 64),
  "local model + (i), array": localJob(first, "array", [plain], 64),
  "local model + (ii), free-electron, two denominators": localJob(second, "free-electron", both, 64),
};

const least = new Map();
let count = 0;
for (let round = 0; round < 500; round++) {
  for (const [name, job] of Object.entries(jobs)) {
    const calls = name.startsWith("local") || name.includes("(ii)") ? 4 : 16;
    const start = performance.now();
    for (let i = 0; i < calls; i++) job(count++);
    const time = ((performance.now() - start) * 1000) / calls;
    if (round > 99) least.set(name, Math.min(least.get(name) ?? time, time));
  }
}
for (const [name, time] of least) {
  console.log(
    `${name.padEnd(52)} ${time.toFixed(1).padStart(7)} us ${Math.round(1e6 / time)
      .toString()
      .padStart(8)} a second`,
  );
}
