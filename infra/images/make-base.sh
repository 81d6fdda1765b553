#!/usr/bin/env bash
# Makes the base images of the container test without a registry of images: from Debian's packages (debootstrap), the
# Node.js and npm of this checkout, and the packages that package-lock.json names. Run as root, with a Docker engine:
#
#   infra/images/make-base.sh [work folder]
#
# Leaves basinloom-local-base (Debian and Node.js), basinloom-local-build (the same with npm and its packages, for a
# build without network) and basinloom-local-redis, all with the tag "bookworm". The work folder may be removed after.
set -euo pipefail
here=$(cd "$(dirname "$0")/../.." && pwd)
work=${1:-$(mktemp -d /var/tmp/basinloom-images.XXXXXX)}
suite=bookworm
node=$(readlink -f "$here/node_modules/node/bin/node")
npm=$(dirname "$(dirname "$(readlink -f "$(command -v npm)")")")
registry=$(npm config get registry)
mkdir -p "$work"

# rootfs NAME PACKAGES: a minimal Debian with these packages, under $work/NAME
rootfs() {
  if [ ! -e "$work/$1.done" ]; then
    mkdir -p "$work/debs"
    debootstrap --variant=minbase --cache-dir="$work/debs" --include="$2" "$suite" "$work/$1"
    touch "$work/$1.done"
  fi
}

# import NAME IMAGE: the folder $work/NAME as an image of one layer
import() {
  tar -C "$work/$1" --one-file-system --exclude=./var/cache/apt --exclude=./var/lib/apt/lists --exclude=./usr/share/doc \
    --exclude=./usr/share/man --exclude=./usr/share/locale -c . |
    docker import --change 'ENV PATH=/usr/local/sbin:/usr/local/bin:/usr/sbin:/usr/bin:/sbin:/bin' - "$2:$suite"
}

rootfs base ca-certificates,libstdc++6
install -m 755 "$node" "$work/base/usr/local/bin/node"
import base basinloom-local-base

rootfs redis redis-server
install -d -o "$(stat -c %u "$work/redis/var/lib/redis")" -g "$(stat -c %g "$work/redis/var/lib/redis")" "$work/redis/data"
import redis basinloom-local-redis

# npm ci needs the tarballs and, as the lock file names no address, also what the registry says of each package.
rm -rf "$work/install" "$work/build"
mkdir -p "$work/install" "$work/build/cache"
cp "$here/package.json" "$here/package-lock.json" "$work/install/"
npm ci --prefix "$work/install" --cache "$work/build/cache" --ignore-scripts --no-audit --no-fund
rm -rf "$work/install" "$work/build/cache/_logs"
cp -r "$npm" "$work/build/npm"
cat >"$work/build/Dockerfile" <<END
FROM basinloom-local-base:$suite
COPY npm /usr/local/lib/node_modules/npm
COPY cache /opt/npm-cache
RUN ["ln", "-s", "../lib/node_modules/npm/bin/npm-cli.js", "/usr/local/bin/npm"]
ENV npm_config_cache=/opt/npm-cache npm_config_offline=true npm_config_registry=$registry
END
docker build -t "basinloom-local-build:$suite" "$work/build"
docker image ls 'basinloom-local-*'
