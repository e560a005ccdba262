// Package body is the geometry of bodies that move: rotations, skeletons, the
// spaces in which their trajectories run, and what sensors and markers fixed to
// them show. It knows numbers only, no takes or channels.
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
// series of its own; see [Unwrap]. [Mean] and [Kabsch] find the rotation in the
// middle of several, and the one between two sets of points.
//
// # Skeletons
//
// A [Skeleton] is a tree of joints. Each joint has a place in the frame of its
// parent, in metres, and may turn, and a few may also move. [Kinematics] gives
// the places of the joints in the world. Where only places are tracked,
// [FindBones] finds what is rigid between them, [Tree.Restore] and [Reach] give
// bones their lengths back, and [Up], [Legs] and [Stillness] tell which feet
// stand when.
//
// # Spaces
//
// A [Space] says what the way from one point to another is, so that a path can
// be measured, interpolated and chained alike whether it is one of places, of
// rotations, of directions or of values with limits.
//
// # Inertial sensors
//
// An accelerometer shows specific force: at rest, the acceleration of gravity
// pointing up. [SeparateGravity] takes that from the movement, and
// [IntegrateDirection] brings it back for a sensor that turns otherwise.
package body
