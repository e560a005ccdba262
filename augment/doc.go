// Package augment makes synthetic takes from recorded ones.
//
// A [Variation] says how takes are varied, a [Maker] applies it to source
// takes, and [Grow] runs a whole stream of recordings through a maker on
// several workers, in a fixed order. Every draw comes from [Generator], keyed
// by seed, source take, draw and group, so the same plan gives the same takes
// to the last bit whatever the number of workers.
package augment
