// Reads what the run has packed: small whole numbers in few bits, and frames foretold from one another.

class PackedNumbers {
  /** @param text base64. */
  constructor(text) {
    this.bytes = bytesOf(text);
    this.at = 0;
  }

  /** The next so many bits as a number; up to 52. */
  #bits(count) {
    const { bytes } = this;
    let value = 0;
    while (count > 0) {
      const free = 8 - (this.at & 7), take = free < count ? free : count;
      value = value * (1 << take) + (bytes[this.at >> 3] >> (free - take) & ((1 << take) - 1));
      this.at += take;
      count -= take;
    }
    return value;
  }

  /** Hands on so many numbers, one after the other. */
  read(count, take) {
    const block = 96, mostOnes = 24, whole = 44, { bytes } = this;
    let low = 0, size = 1;
    for (let i = 0; i < count; i++) {
      if (i % block === 0) {
        low = this.#bits(6);
        size = Math.pow(2, low);
      }
      let high = 0;
      while (high < mostOnes && bytes[this.at >> 3] >> (7 - (this.at & 7)) & 1) {
        high++;
        this.at++;
      }
      let v;
      if (high === mostOnes) {
        v = this.#bits(whole);
      } else {
        this.at++;
        v = high * size + this.#bits(low);
      }
      take(v % 2 ? -(v + 1) / 2 : v / 2, i);
    }
  }
}

/**
 * The potential of a frame: from earlier frames by their weights, from neighbours on the mesh, and what is left in steps of the frame's range. The same sums in the same
 * order as in the run, so that every step falls as it did there.
 */
function unpackFrame(mesh, frame, before) {
  const { low, high, by, plus } = frame, { first, second } = mesh.before, step = (high - low) / 4294967295, phi = new Float64Array(mesh.count);
  const rest = frame.smooth ? new Float64Array(mesh.count) : null;
  new PackedNumbers(frame.rest).read(mesh.count, (v, i) => {
    if (rest) {
      rest[i] = v += first[i] < 0 ? 0 : Math.floor((rest[first[i]] + rest[second[i]]) / 2);
    }
    if (by.length) {
      let expected = plus;
      for (let j = 0; j < by.length; j++) {
        expected += by[j] * before[j][i];
      }
      v += Math.floor((expected - low) / step + 0.5);
    }
    phi[i] = low + v * step;
  });
  return phi;
}
