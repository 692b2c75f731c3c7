#!/bin/sh
# Makes the keys of this folder anew. They are worthless: everybody has them. Never enrol them in a roster in use.
set -eu
cd "$(dirname "$0")/keys"
rm -f ./*_worthless ./*_worthless.pub
ssh-keygen -q -t ed25519 -N '' -C 'worthless test key' -f ed25519_worthless
ssh-keygen -q -t ecdsa -b 256 -N '' -C 'worthless test key' -f ecdsa_worthless
ssh-keygen -q -t ed25519 -N 'seven buffers' -C 'worthless test key' -f locked_worthless
