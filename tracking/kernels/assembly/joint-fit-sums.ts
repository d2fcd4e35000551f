/** Sums over the lanes of four vectors: (sum a, sum b, sum c, sum d). */
export function laneSums(a: v128, b: v128, c: v128, d: v128): v128 {
  const ab = f32x4.add(v128.shuffle<f32>(a, b, 0, 1, 4, 5), v128.shuffle<f32>(a, b, 2, 3, 6, 7));
  const cd = f32x4.add(v128.shuffle<f32>(c, d, 0, 1, 4, 5), v128.shuffle<f32>(c, d, 2, 3, 6, 7));
  return f32x4.add(v128.shuffle<f32>(ab, cd, 0, 2, 4, 6), v128.shuffle<f32>(ab, cd, 1, 3, 5, 7));
}

export function laneSum(a: v128): f64 {
  const pair = f32x4.add(a, v128.shuffle<f32>(a, a, 2, 3, 0, 1));
  return <f64>(f32x4.extract_lane(pair, 0) + f32x4.extract_lane(pair, 1));
}
