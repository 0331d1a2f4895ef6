/** Station numbers in the order of chainage; stations at one chainage keep the order of the file. */
export function byChainage(chainage: Float64Array): Uint32Array {
  const order = new Uint32Array(chainage.length);
  let sorted = true;
  for (let i = 0; i < order.length; ++i) {
    order[i] = i;
    if (i > 0 && chainage[i]! < chainage[i - 1]!) sorted = false;
  }
  return sorted ? order : order.sort((a, b) => chainage[a]! - chainage[b]! || a - b);
}
