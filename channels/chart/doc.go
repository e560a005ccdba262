// Package chart lays takes out in coordinates in which they may be read at
// other times, mixed with other takes, scaled about their mean and rotated as
// if space were flat, and brings them back into channels so that what must stay
// whole stays whole: bones, rotations, gravity, limits, feet that stand.
//
// # Use
//
//	c, err := chart.New(layout, skeleton, chart.Options{})
//	p := c.Plot(take)              // frames × c.Width() coordinates
//	…                              // read p.Values at other times, and vary them by p.Parts()
//	c.Rotate(values, rotation, p)
//	data := c.Take(p, time, values)
//
// Unvaried values on the take's own clock come back as the take's data to within
// rounding. What a caller may do with a coordinate is said by the [Kind] of its
// [Part]:
//
//	kind     read at other times   mix with another take   scale         and times
//	free     yes                   yes                     about mean
//	turn     yes                   yes                     about mean
//	rate     yes                   yes                     about zero    tempo
//	linear   yes                   yes                     about zero    tempo²
//	fixed    yes                   only gravity            no
//
// Tempo is how many seconds of the source pass in a second of the new take. The
// parts of one limb must be read at the same times, and a part that follows
// another must be given the same draws.
//
// # Geometries
//
// Channels of a layout are taken by the first of these that knows them.
//
// Skeletons. The turns of joints, channels such as Hips.ornt.quat_x, are
// rotation vectors about each joint's mean rotation, and the places of those
// joints that move, such as the root, are plain; other joints that move do so in
// the frame of their parent. All places are computed anew from these by forward
// kinematics ([body.Kinematics]), so that places and turns agree and bones keep
// their length exactly, whatever is done to the coordinates. A place that does
// not follow from the turns there are, because channels were left out, is a
// tracked point like any other.
//
// Tracked points on bones ([Options].Bones, see [FindBones], or the bones of a
// skeleton whose turns the layout has not). A root has its place; every other
// point the way to it from its parent, which may be varied, and the length of
// that way, which is fixed. Each point is put back at the end of its parent's
// bone, with the length the bone has in the source at the instant shown.
//
// Feet. When a foot of such a body stands still for a while in a take
// ([body.Stillness]), the root and the joints from it to the foot are fixed and
// are one limb, so that they are read at one time and the foot stays where it
// stands. Which these are differs from take to take: ask [Plot.Parts]. A body
// that stands is only turned about the upright. [Options].FreeFeet lifts all
// this.
//
// Inertial sensors: an accelerometer in m/s² and, where there is one, the
// gyroscope in rad/s of the same tracked point, three axes each. Axes that have
// no names are told by their group, which holds no others of their quantity, and
// the gyroscope then by the limb. [body.SeparateGravity] parts the acceleration
// into gravity and the rest. With a gyroscope the coordinates are the linear
// acceleration, the rate, the rate that the direction of gravity follows (the
// gyroscope's with a slow correction), and that direction, of which the first
// frame counts: from there it is carried on by its rate, so that gravity swings
// with the gyroscope when strength or tempo change, and differs from the
// gyroscope's own integral as it does in the source. Without one, the direction
// is read at other times and given length one again. Gravity keeps the
// magnitude that the take shows at rest. A take whose triad has no length near
// that of gravity, since its unit is another or gravity is taken off already,
// has its mean in the place of gravity, which does not turn.
//
// Rotations: the four components of a quaternion of one tracked point, as a
// rotation vector about the take's mean rotation. Vectors are continuous, beyond
// π too, and quaternions come back with continuous signs, of length one.
// Orientations in other angles, about which nothing but numbers is known, are
// plain, as are joint angles; they do not rotate.
//
// Plain channels are coordinates as they are, bit for bit. Those with
// [Options].Limits, when they are scalars and free, go through an arcsine that
// straightens the way to their limits: see the source of bounds. Channels of
// sensors and of vectors are cut off at their limits, as a sensor does.
//
// # Rotations of a take
//
// [Chart.Rotate] turns everything by one rotation, so that sensors fixed to one
// body stay one body. Plain vectors turn about their mean over the take, in a
// plane by the angle the rotation has about z; velocities, magnetic fields and
// the readings of inertial sensors about zero. A body turns about the mean place
// of its root. A quaternion q becomes r q, turned in the world, or q r⁻¹ where
// the point carries an inertial sensor: there the rotation r is how the sensors
// sit on the limb.
//
// # Mirror
//
// [Mirror] changes the sides of a take. It makes another gesture of one that is
// made with one hand.
package chart
