// Package body is the geometry of bodies that move: rotations, skeletons, and
// where a skeleton's joints are when each of them turns.
//
// # Rotations
//
// A rotation is a unit quaternion w + xi + yj + zk, a [quat.Number], that turns
// a column vector v into q v q⁻¹ (right-handed, active). Quaternions p and q
// joined as p q turn by q first when seen from outside, and by p first when
// seen from the body. A stored quaternion has its parts in the order x, y, z,
// w, the scalar last; see [Load] and [Store]. Angles are in radians.
//
// The quaternions q and -q are one rotation. A series of rotations is stored
// with the signs that make neighbours nearest, so that every part is a smooth
// series of its own; see [Unwrap].
//
// # Skeletons
//
// A [Skeleton] is a tree of joints. Each joint has a place in the frame of its
// parent, in metres, and may turn, and a few may also move. [Kinematics] gives
// the places of the joints in the world.
package body
