/** Heat held by one litre of water per kelvin, Wh (4.1868 kJ/(kg·K) over 3.6, one kilogram per litre). */
export const WATER_WH = 1.163;

export interface CylinderShape {
  litres: number;
  uaWPerK: number;
  pipeWPerK: number;
  slimness: number;
  layers: number;
  conductivity: number;
}

/**
 * A stratified cylinder of equal layers, the lowest first. Heat moves by draw-off (cold in at the bottom, the top layer
 * out), conduction between neighbours, loss through the walls of each layer, and by warm water rising: where a layer is
 * warmer than the one above, the two mix until none is.
 */
export class Cylinder {
  readonly temps: Float64Array;
  readonly layerWhPerK: number;
  /** Loss of each layer, W/K. */
  readonly walls: Float64Array;
  private readonly betweenWPerK: number;
  private readonly poolHeat: Float64Array;
  private readonly poolSize: Int32Array;

  constructor(
    readonly shape: CylinderShape,
    startC: number,
  ) {
    const { layers, litres, slimness } = shape;
    this.temps = new Float64Array(layers).fill(startC);
    this.layerWhPerK = (WATER_WH * litres) / layers;
    const diameter = Math.cbrt((4 * litres) / 1000 / (Math.PI * slimness));
    const height = slimness * diameter;
    const section = (Math.PI * diameter * diameter) / 4;
    const side = (Math.PI * diameter * height) / layers;
    const whole = side * layers + 2 * section;
    this.walls = Float64Array.from({ length: layers }, (_, i) => {
      const area = side + (i === 0 || i === layers - 1 ? section : 0);
      return (shape.uaWPerK * area) / whole + (i === layers - 1 ? shape.pipeWPerK : 0);
    });
    this.betweenWPerK = (shape.conductivity * section) / (height / layers);
    this.poolHeat = new Float64Array(layers);
    this.poolSize = new Int32Array(layers);
  }

  /** Heat held above 0 °C, Wh. */
  heldWh(): number {
    let sum = 0;
    for (const t of this.temps) sum += t;
    return sum * this.layerWhPerK;
  }

  /** Temperature at a height (0 bottom, 1 top), straight between the middles of layers. */
  at(height: number): number {
    const { temps } = this;
    const place = Math.min(temps.length - 1, Math.max(0, height * temps.length - 0.5));
    const low = Math.floor(place);
    const high = Math.min(temps.length - 1, low + 1);
    return temps[low] + (place - low) * (temps[high] - temps[low]);
  }

  /** Puts heat in evenly between two heights, Wh. */
  heat(wh: number, low: number, high: number): void {
    const { temps, layerWhPerK } = this;
    const n = temps.length;
    const first = Math.min(n - 1, Math.floor(low * n));
    const last = Math.max(first, Math.min(n - 1, Math.ceil(high * n) - 1));
    const rise = wh / ((last - first + 1) * layerWhPerK);
    for (let i = first; i <= last; i++) temps[i] += rise;
  }

  /** Draws water off the top and lets cold in below. Returns the heat taken above that of the cold, Wh. */
  draw(litres: number, coldC: number): number {
    const { temps } = this;
    const n = temps.length;
    const layer = this.shape.litres / n;
    let left = litres;
    let taken = 0;
    while (left > 0) {
      const share = Math.min(1, left / layer);
      taken += share * layer * WATER_WH * (temps[n - 1] - coldC);
      for (let i = n - 1; i > 0; i--) temps[i] += share * (temps[i - 1] - temps[i]);
      temps[0] += share * (coldC - temps[0]);
      left -= share * layer;
    }
    return taken;
  }

  /** Conduction and standing loss for some seconds, `factor` times the usual loss plus `topWPerK` at the top. Returns the loss, Wh. */
  rest(seconds: number, ambientC: number, factor = 1, topWPerK = 0): number {
    const { temps, walls, layerWhPerK } = this;
    const n = temps.length;
    const hours = seconds / 3600;
    const between = (this.betweenWPerK * hours) / layerWhPerK;
    const perWall = (hours * factor) / layerWhPerK;
    let flow = 0;
    let lost = 0;
    for (let i = 0; i < n; i++) {
      const here = temps[i];
      const up = i + 1 < n ? between * (here - temps[i + 1]) : ((topWPerK * hours) / layerWhPerK) * (here - ambientC);
      const loss = walls[i] * perWall * (here - ambientC);
      lost += loss;
      temps[i] = here + flow - up - loss;
      flow = up;
    }
    return (lost + flow) * layerWhPerK;
  }

  /** Lets warm water rise: neighbours out of order are pooled at their mean until the store is in order. */
  settle(): void {
    const { temps, poolHeat, poolSize } = this;
    const n = temps.length;
    let ordered = true;
    for (let i = 1; i < n; i++) {
      if (temps[i] < temps[i - 1]) {
        ordered = false;
        break;
      }
    }
    if (ordered) return;
    let pools = 0;
    for (let i = 0; i < n; i++) {
      let heat = temps[i];
      let size = 1;
      while (pools > 0 && poolHeat[pools - 1] / poolSize[pools - 1] > heat / size) {
        pools--;
        heat += poolHeat[pools];
        size += poolSize[pools];
      }
      poolHeat[pools] = heat;
      poolSize[pools] = size;
      pools++;
    }
    let i = 0;
    for (let p = 0; p < pools; p++) {
      const mean = poolHeat[p] / poolSize[p];
      for (let k = 0; k < poolSize[p]; k++) temps[i++] = mean;
    }
  }
}
