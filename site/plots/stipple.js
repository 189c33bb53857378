// Stippling: dots whose density follows a local concentration. The points are a progressive
// blue-noise set on a torus (best candidate of several, Mitchell, SIGGRAPH Comput. Graph. 25,
// 157 (1991)): every prefix of the set is evenly spread, so thinning by "keep the first
// fraction" leaves the rest in place, and a dot comes or goes but never jumps while a value
// is dragged. The seed is fixed: the same case gives the same picture everywhere.

export const TILE = 256; // px, edge of the torus
export const AREA = 14; // px² per dot at the highest density
const COUNT = Math.round((TILE * TILE) / AREA);
const CANDIDATES = 8;

// random is the mulberry32 generator (public domain): reproducible, enough for a picture.
function random(seed) {
  let a = seed;
  return () => {
    a = (a + 0x6d2b79f5) | 0;
    let t = Math.imul(a ^ (a >>> 15), 1 | a);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

// Cells buckets points so that the nearest one is found among 5 × 5 buckets.
class Cells {
  constructor(n) {
    this.n = n;
    this.size = TILE / n;
    this.lists = Array.from({ length: n * n }, () => []);
  }
  add(x, y) {
    this.lists[Math.floor(y / this.size) * this.n + Math.floor(x / this.size)].push(x, y);
  }
  // nearest gives the squared distance to the closest point, at most two buckets away.
  nearest(x, y) {
    const { n, size, lists } = this, reach = Math.min(2, (n - 1) >> 1);
    const i = Math.floor(x / size), j = Math.floor(y / size);
    let best = (2 * size) ** 2;
    for (let dj = -reach; dj <= reach; dj++) {
      for (let di = -reach; di <= reach; di++) {
        const list = lists[((j + dj + n) % n) * n + ((i + di + n) % n)];
        for (let k = 0; k < list.length; k += 2) {
          let dx = Math.abs(x - list[k]), dy = Math.abs(y - list[k + 1]);
          if (dx > TILE / 2) dx = TILE - dx;
          if (dy > TILE / 2) dy = TILE - dy;
          const d = dx * dx + dy * dy;
          if (d < best) best = d;
        }
      }
    }
    return best;
  }
}

// blueNoise lists count points x, y, x, y, … in the order in which they may be added.
export function blueNoise(count = COUNT, seed = 20) {
  const rnd = random(seed), points = new Float64Array(2 * count);
  let cells = new Cells(1), next = 4;
  for (let i = 0; i < count; i++) {
    if (i === next) { // finer buckets as the set fills up
      cells = new Cells(Math.max(1, Math.floor(Math.sqrt(i))));
      for (let k = 0; k < i; k++) cells.add(points[2 * k], points[2 * k + 1]);
      next *= 4;
    }
    let bx = 0, by = 0, best = -1;
    for (let c = 0; c < CANDIDATES; c++) {
      const x = rnd() * TILE, y = rnd() * TILE, d = cells.nearest(x, y);
      if (d > best) { best = d; bx = x; by = y; }
    }
    points[2 * i] = bx;
    points[2 * i + 1] = by;
    cells.add(bx, by);
  }
  return points;
}

let shared = null;

// dots calls put(x, y) for each dot in the box. density[k] is 0…1 of the highest density in
// pixel column x0+k; (ox, oy) is the origin of the tiling: keep it at a fixed place of the drawing.
export function dots({ x0, x1, y0, y1 }, density, ox, oy, put) {
  shared ??= blueNoise();
  const first = (v, o) => Math.floor((v - o) / TILE);
  for (let i = first(x0, ox); i <= first(x1, ox); i++) {
    const left = ox + i * TILE;
    let top = 0;
    for (let k = Math.max(0, Math.floor(left - x0)); k < Math.min(density.length, left - x0 + TILE); k++) {
      if (density[k] > top) top = density[k];
    }
    const last = Math.ceil(top * COUNT);
    for (let j = first(y0, oy); j <= first(y1, oy); j++) {
      for (let p = 0; p < last; p++) {
        const x = left + shared[2 * p], y = oy + j * TILE + shared[2 * p + 1];
        if (x < x0 || x >= x1 || y < y0 || y >= y1) continue;
        if ((p + 0.5) / COUNT <= density[Math.floor(x - x0)]) put(x, y);
      }
    }
  }
}

// thinning says how concentration becomes density: linear while the enrichment stays below
// 20 times, ln(1 + c/c∞) above. bulk is the density where c = c∞.
export function thinning(highest) {
  if (highest > 20) {
    const full = Math.log1p(highest);
    return { log: true, bulk: Math.log(2) / full, of: (r) => Math.log1p(Math.max(0, r)) / full };
  }
  const unit = Math.min(1 / 3, 1 / Math.max(1, highest));
  return { log: false, bulk: unit, of: (r) => Math.max(0, r) * unit };
}
