// From both mirrors' phases, in turns, to the spot on the wall: x to the right, y up, the middle at 0.

// Sets `out.x` and `out.y`; made once for a scene.
function spotOf(optics) {
  return optics.trace ? traced(optics) : firstOrder(optics);
}

function turnsToAngle(turns) {
  return 2 * Math.PI * (turns - Math.floor(turns));
}

// The sum of two turning vectors, or of two vibrations at right angles.
function firstOrder({ projection, reach }) {
  if (projection === "crossed") {
    return (a, b, out) => {
      out.x = reach.a * Math.sin(turnsToAngle(a));
      out.y = reach.b * Math.sin(turnsToAngle(b));
    };
  }
  return (a, b, out) => {
    const angleA = turnsToAngle(a);
    const angleB = turnsToAngle(b);
    out.x = reach.a * Math.cos(angleA) + reach.b * Math.cos(angleB);
    out.y = reach.a * Math.sin(angleA) + reach.b * Math.sin(angleB);
  };
}

// Reflected at both mirrors, ray by ray: r = d − 2(d·n)n, then straight on to the wall.
function traced({ projection, trace }) {
  const { incoming, a_to_b: toB, throw: distance, mirrors } = trace;
  const lean = projection === "crossed" ? swung : spun;
  const normalA = [0, 0, 0];
  const normalB = [0, 0, 0];
  const ray = [0, 0, 0];
  return (a, b, out) => {
    lean(mirrors.a, a, 0, normalA);
    lean(mirrors.b, b, 0.25, normalB);
    reflect(incoming, normalA, ray);
    // From the first mirror to the plane of the second, seen from the second one's middle.
    const way = dot(toB, normalB) / dot(ray, normalB);
    const hitX = ray[0] * way - toB[0];
    const hitY = ray[1] * way - toB[1];
    const hitZ = ray[2] * way - toB[2];
    reflect(ray, normalB, ray);
    const on = (-distance - hitZ) / ray[2];
    out.x = hitX + ray[0] * on;
    out.y = hitY + ray[1] * on;
  };
}

// The normal of a spinning mirror: it leans by its tilt to where its phase points.
function spun(mirror, phase, _direction, out) {
  leaned(mirror, mirror.tilt, turnsToAngle(phase), out);
}

// The normal of a swinging mirror: it leans to and fro in one direction.
function swung(mirror, phase, direction, out) {
  leaned(mirror, mirror.tilt * Math.sin(turnsToAngle(phase)), 2 * Math.PI * direction, out);
}

function leaned({ shaft, across }, angle, to, out) {
  const up = Math.sin(to);
  const side = Math.cos(to);
  const sin = Math.sin(angle);
  const cos = Math.cos(angle);
  out[0] = shaft[0] * cos + across[0] * side * sin;
  out[1] = shaft[1] * cos + (across[1] * side + up) * sin;
  out[2] = shaft[2] * cos + across[2] * side * sin;
}

function dot(one, two) {
  return one[0] * two[0] + one[1] * two[1] + one[2] * two[2];
}

function reflect(ray, normal, out) {
  const twice = 2 * dot(ray, normal);
  const [x, y, z] = ray;
  out[0] = x - twice * normal[0];
  out[1] = y - twice * normal[1];
  out[2] = z - twice * normal[2];
}
