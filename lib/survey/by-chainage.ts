/** Station numbers in the order of chainage; stations at one chainage keep the order of the file. */
export function byChainage(chainage: Float64Array): Uint32Array {
  const order = new Uint32Array(chainage.length);
  let sorted = true;
  // A line flown against its axis; where two stations are at one place their order is that of the file.
  let reversed = true;
  for (let i = 0; i < order.length; ++i) {
    order[i] = i;
    if (i === 0) continue;
    if (chainage[i]! < chainage[i - 1]!) sorted = false;
    if (!(chainage[i]! < chainage[i - 1]!)) reversed = false;
  }
  if (sorted) return order;
  return reversed ? order.reverse() : order.sort((a, b) => chainage[a]! - chainage[b]! || a - b);
}
