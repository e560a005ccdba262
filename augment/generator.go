package augment

import (
	"crypto/sha256"
	"encoding/binary"
	"math/rand/v2"
)

// Generator returns the random generator of one group of one draw: PCG-DXSM
// (math/rand/v2) seeded with the first 128 bits of the SHA-256 digest of the
// key. It is the only source of randomness in making takes, so the same seed,
// source take id, draw number and group give the same numbers on any machine,
// in any order and with any number of workers.
func Generator(seed uint64, take string, draw int, group string) *rand.Rand {
	key := binary.LittleEndian.AppendUint64(nil, seed)
	key = binary.LittleEndian.AppendUint64(key, uint64(draw))
	key = binary.LittleEndian.AppendUint64(key, uint64(len(take)))
	key = append(key, take...)
	key = append(key, group...)
	sum := sha256.Sum256(key)
	return rand.New(rand.NewPCG(binary.LittleEndian.Uint64(sum[:8]), binary.LittleEndian.Uint64(sum[8:16])))
}
