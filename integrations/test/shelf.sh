# The throw-away repository: a few designs of the demonstration shelf, and two that share a compensator.
# shellcheck shell=sh disable=SC2154,SC2164 # read by ../test.sh
section "a repository"
exits 0 "$HALFPLANE" demo --to "$scratch/demo"
repository="$scratch/tidal station"
git init --quiet "$repository"
cd "$repository"
mkdir -p shelf "common parts" notes
for design in sonde skiff-light tide-gauge turbine-log; do
  cp "$scratch/demo/$design.converter.yaml" shelf/
done
cp "$scratch/demo/buoy-telemetry.converter.json" shelf/
printf 'Soundings of the outer harbour.\n' >notes/log.txt
cat >"common parts/beacon.compensator.yaml" <<'SHARED'
format: 1
title: Compensator of the beacons
network: type-3
reference-voltage: 1.25 V
upper-resistor: 100k ± 1 %
lower-resistor: 5k49 ± 1 %
feedback-resistor: 7k87 ± 1 %
integrator-capacitor: 39n ± 5 %
rolloff-capacitor: 1n ± 5 %
lead-resistor: 2k05 ± 1 %
lead-capacitor: 2n7 ± 5 %
amplifier: {gain-bandwidth: 10 MHz, open-loop-gain: 90 dB}
SHARED
cat >"shelf/harbour beacon.converter.yaml" <<'DESIGN'
format: 1
title: Harbour beacon boost
topology: boost
switching-frequency: 250 kHz
input-voltage: {min: 9 V, nominal: 12 V, max: 16 V}
output-voltage: 24 V
load: {current: {min: 0.2 A, nominal: 1 A, max: 1.5 A}}
inductor: {inductance: 22 uH ± 20 %, resistance: 25 mΩ}
output-capacitor: {capacitance: 220 uF ± 20 %, esr: {min: 8 mΩ, nominal: 12 mΩ, max: 25 mΩ}, count: 2}
switch: {on-resistance: 15 mΩ}
rectifier: {resistance: 12 mΩ, synchronous: true}
modulator: {scheme: voltage-mode, ramp-amplitude: 1.7 V ± 5 %, duty-limit: {min: 0, max: 0.8}}
compensator: {use: "../common parts/beacon.compensator.yaml"}
targets: {phase-margin: 45 deg, gain-margin: 8 dB}
DESIGN
sed 's/Harbour beacon/Reef beacon/' "shelf/harbour beacon.converter.yaml" >"shelf/reef µ \"beacon\".converter.yaml"
exits 0 "$HALFPLANE" check --depth quick
says "8 files" # with the compensator
